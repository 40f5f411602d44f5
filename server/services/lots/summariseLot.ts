import { potentialAlcohol } from '../../../shared/cellar/alcohol.ts';
import { lotLikeness } from '../../../shared/cellar/lotLikeness.ts';
import { lotPh, lotTonnes, lotValue, type LotPart } from '../../../shared/cellar/lots.ts';
import { fitTank, litreHints, litresFrom } from '../../../shared/cellar/tankFit.ts';
import type { LotSummary, TankView, WineType } from '../../../shared/contracts/lots.ts';
import type { Estimate } from '../../../shared/sampling/precision.ts';
import { criticalT } from '../../../shared/sampling/quantiles.ts';
import type { Zone } from '../../models/Zone.ts';
import type { BoardBlock } from './boardGround.ts';
import { boardConfidence, figureOf, type ZoneOutlook } from './zoneOutlook.ts';

/** Part of a zone in a lot; `share` is of its bearing vines. */
export interface LotShare {
  block: BoardBlock;
  zone: Zone;
  outlook: ZoneOutlook;
  vines: number;
  bearing: number;
  share: number;
  /** Rows of a part; null when the whole zone is in the lot. */
  rowIds: string[] | null;
}

type MeasuredCode = 'brix' | 'ph' | 'ta';

/** What a lot is expected to be: area, tonnes, composition, alcohol if all sugar ferments, litres and whether they fit. */
export function summariseLot(shares: LotShare[], how: { wineType: WineType; tank: TankView | null }): LotSummary {
  const tonnes = shares.length === 0 ? null : lotTonnes(shares.map((share) => ({ tonnes: tonnesOf(share) })));
  const brix = valueOf(shares, 'brix', lotValue);
  const ph = valueOf(shares, 'ph', lotPh);
  const ta = valueOf(shares, 'ta', lotValue);
  const mustL = tonnes && litresFrom(tonnes, hintOf(how.wineType === 'red' ? 'redMust' : 'whiteJuice'));
  const wineL = tonnes && litresFrom(tonnes, hintOf('finishedWine'));
  const brixHalf = brix === null ? null : criticalT(boardConfidence, Math.max(1, brix.value.df)) * brix.value.standardError;
  return {
    areaHa: sum(shares, ({ share, zone }) => (share * zone.areaM2) / 10_000),
    vines: sum(shares, ({ vines }) => vines),
    bearing: sum(shares, ({ bearing }) => bearing),
    tonnes: tonnes && figureOf(tonnes, { n: null, kind: 'estimated' }),
    dominating: dominatingPart(shares),
    brix: brix && figureOf(brix.value, { n: brix.n, kind: 'measured' }),
    ph: ph && figureOf(ph.value, { n: ph.n, kind: 'estimated' }),
    phViaHydrogen: ph ? ph.value.viaHydrogen : null,
    ta: ta && figureOf(ta.value, { n: ta.n, kind: 'measured' }),
    weighting: brix?.value.weighting ?? null,
    alcohol: brix === null || brixHalf === null || !Number.isFinite(brixHalf) ? null : potentialAlcohol({ lower: brix.value.value - brixHalf, value: brix.value.value, upper: brix.value.value + brixHalf }, 'brixFactor'),
    mustL: mustL && figureOf(mustL, { n: null, kind: 'estimated' }),
    wineL: wineL && figureOf(wineL, { n: null, kind: 'estimated' }),
    betweenShare: likeness(shares),
    tank: how.tank && mustL ? tankOf(mustL, how.tank) : null,
    unknown: (['brix', 'ph', 'ta'] as const).map((measure) => ({ measure, zones: shares.filter((share) => !isKnown(share, measure)).map(({ block, zone }) => `${block.ground.block.name} ${zone.number}`) })).filter((entry) => entry.zones.length > 0),
  };
}

function valueOf<Value extends Estimate>(shares: LotShare[], code: MeasuredCode, combine: (parts: LotPart[]) => Value): { value: Value; n: number } | null {
  const known = shares.filter((share) => share.share > 0 && isKnown(share, code));
  if (known.length === 0) return null;
  const parts = known.map((share): LotPart => ({ zone: share.zone.id, areaHa: (share.share * share.zone.areaM2) / 10_000, tonnes: tonnesOf(share), value: share.outlook.latest[code]!.estimate }));
  return { value: combine(parts), n: sum(known, (share) => share.outlook.latest[code]!.n) };
}

function isKnown({ outlook }: LotShare, code: MeasuredCode): boolean {
  return outlook.latest[code] !== null && Number.isFinite(outlook.latest[code].estimate.standardError);
}

function tonnesOf({ outlook, share }: LotShare): Estimate {
  return { value: outlook.tonnes.value * share, standardError: outlook.tonnes.standardError * share, df: outlook.tonnes.df };
}

/** The part with the largest share of the squared error over all zones of the lot. */
function dominatingPart(shares: LotShare[]): string | null {
  const weights = new Map<string, number>();
  for (const share of shares) {
    const square = tonnesOf(share).standardError ** 2;
    for (const { part, share: of } of share.outlook.yield.parts) weights.set(part, (weights.get(part) ?? 0) + square * of);
  }
  const [first] = [...weights].sort((a, b) => b[1] - a[1]);
  return first && first[1] > 0 ? first[0] : null;
}

function likeness(shares: LotShare[]): number | null {
  const known = shares.filter((share) => share.share > 0 && isKnown(share, 'brix'));
  if (known.length < 2) return null;
  return lotLikeness(known.map((share) => ({ zone: share.zone.id, weight: tonnesOf(share).value, mean: share.outlook.latest.brix!.estimate, sd: share.outlook.latest.brix!.sd }))).betweenShare;
}

/** Middle of the customary range, with a standard error that puts its ends at two of them. */
function hintOf(id: (typeof litreHints)[number]['id']): Estimate {
  const hint = litreHints.find((candidate) => candidate.id === id)!;
  return { value: (hint.lowLPerT + hint.highLPerT) / 2, standardError: (hint.highLPerT - hint.lowLPerT) / 4, df: Infinity };
}

function tankOf(mustL: Estimate, tank: TankView): LotSummary['tank'] {
  const { workingL, chanceOfFit, chanceBelowMinimum } = fitTank(mustL, { volumeL: tank.litres, fillShare: tank.workingFill, minimumL: tank.litres * tank.minimumFill });
  return { tankId: tank.id, name: tank.name, workingL, chanceOfFit, chanceBelowMinimum };
}

function sum<Item>(items: readonly Item[], of: (item: Item) => number): number {
  return items.reduce((total, item) => total + of(item), 0);
}
