import { potentialAlcohol } from '../../../shared/cellar/alcohol.ts';
import { scaled, timesShared, type Dependent } from '../../../shared/cellar/dependent.ts';
import { nextLot } from '../../../shared/cellar/learnFactor.ts';
import { lotLikeness, type LikenessPart } from '../../../shared/cellar/lotLikeness.ts';
import { lotPh, lotTonnes, lotValue, type LotPart } from '../../../shared/cellar/lots.ts';
import { fitTank, hintFor, type LitreHint } from '../../../shared/cellar/tankFit.ts';
import type { BrixMethod, LotSummary, TankView, WineType } from '../../../shared/contracts/lots.ts';
import { combineLinearly } from '../../../shared/sampling/combineEstimates.ts';
import type { Estimate } from '../../../shared/sampling/precision.ts';
import { criticalT } from '../../../shared/sampling/quantiles.ts';
import type { Zone } from '../../models/Zone.ts';
import type { BoardBlock } from './boardGround.ts';
import { boardConfidence, figureOf, type UsedFactors, type ZoneOutlook } from './zoneOutlook.ts';

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
export function summariseLot(shares: LotShare[], how: { wineType: WineType; tank: TankView | null; factors: UsedFactors; alcoholMethod: BrixMethod }): LotSummary {
  const tonnes = shares.length === 0 ? null : lotTonnes(shares.map((share) => ({ tonnes: tonnesOf(share) })));
  const brix = valueOf(shares, 'brix', lotValue);
  const ph = valueOf(shares, 'ph', lotPh);
  const ta = valueOf(shares, 'ta', lotValue);
  const mustL = tonnes && timesShared(tonnes, mustPerTonne(how.wineType, how.factors), `must ${how.wineType}`);
  const wineL = tonnes && timesShared(tonnes, winePerTonne(how.wineType, how.factors), `wine ${how.wineType}`);
  const tankBrix = brix && inTank(brix.value, shares, how.factors);
  const told = tankBrix?.brix ?? brix?.value ?? null;
  const brixHalf = told === null ? null : criticalT(boardConfidence, Math.max(1, told.df)) * told.standardError;
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
    tankBrix: tankBrix && { figure: figureOf(tankBrix.brix, { n: tankBrix.n, kind: 'estimated' }), offset: tankBrix.offset },
    litreSource: { must: how.factors.mustL.get(how.wineType)?.n ?? null, wine: how.factors.wineL.get(how.wineType)?.n ?? null },
    alcohol: told === null || brixHalf === null || !Number.isFinite(brixHalf) ? null : { ...potentialAlcohol({ lower: told.value - brixHalf, value: told.value, upper: told.value + brixHalf }, how.alcoholMethod), method: how.alcoholMethod },
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
  const parts = known.map((share): LotPart => ({ zone: share.zone.id, areaHa: (share.share * share.zone.areaM2) / 10_000, tonnes: isCounted(share) ? tonnesOf(share) : null, value: share.outlook.latest[code]!.estimate }));
  return { value: combine(parts), n: sum(known, (share) => share.outlook.latest[code]!.n) };
}

function isKnown({ outlook }: LotShare, code: MeasuredCode): boolean {
  return outlook.latest[code] !== null && Number.isFinite(outlook.latest[code].estimate.standardError);
}

/** Its clusters were counted or weighed. Tonnes from usual figures alone say no more than its area does. */
function isCounted({ outlook }: LotShare): boolean {
  return outlook.parts.some(({ part, kind }) => (part === 'clusters' || part === 'clusterWeight') && kind === 'measured');
}

function tonnesOf({ outlook, share }: LotShare): Dependent {
  return scaled(outlook.tonnes, share);
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
  const parts = likenessParts(shares);
  return parts && lotLikeness(parts).betweenShare;
}

function likenessParts(shares: LotShare[]): LikenessPart[] | null {
  const known = shares.filter((share) => share.share > 0 && isKnown(share, 'brix'));
  if (known.length < 2) return null;
  return known.map((share) => ({ zone: share.zone.id, weight: tonnesOf(share).value, mean: share.outlook.latest.brix!.estimate, sd: share.outlook.latest.brix!.sd }));
}

/** What the lot would be without one of its zones: °Brix and how much of its spread lies between zones; null when that cannot be told. */
export function withoutZone(shares: LotShare[], at: number): { brix: number; betweenShare: number } | null {
  const parts = likenessParts(shares);
  if (parts === null) return null;
  const found = lotLikeness(parts).without.find(({ zone }) => zone === shares[at]!.zone.id);
  return found ? { brix: found.mean, betweenShare: found.betweenShare } : null;
}

/** Litres of must, and of wine, a tonne: learned where that is switched on, else the custom of the trade. */
export function mustPerTonne(wineType: string, factors: UsedFactors): Estimate {
  const learned = factors.mustL.get(wineType);
  return learned ? nextLot(learned) : middleOf(hintFor(wineType, 'must'));
}

function winePerTonne(wineType: string, factors: UsedFactors): Estimate {
  const learned = factors.wineL.get(wineType);
  if (learned) return nextLot(learned);
  const custom = middleOf(hintFor(wineType, 'wine'));
  const must = factors.mustL.get(wineType);
  // Where the estate's own must is known, wine keeps its customary share of it.
  const scale = must ? must.mean / middleOf(hintFor(wineType, 'must')).value : 1;
  return { ...custom, value: custom.value * scale, standardError: custom.standardError * scale };
}

/** °Brix as the tank would read it, by the offset learned for the variety; null while it is off or varieties are mixed. */
function inTank(brix: Estimate, shares: LotShare[], factors: UsedFactors): { brix: Estimate; offset: number; n: number } | null {
  const [variety, ...others] = new Set(shares.map(({ block }) => block.ground.block.variety));
  const learned = variety === undefined || others.length > 0 ? undefined : factors.tankOffset.get(variety);
  if (!learned) return null;
  return { brix: combineLinearly([{ factor: 1, estimate: brix }, { factor: -1, estimate: nextLot(learned) }]), offset: learned.mean, n: learned.n };
}

/** Middle of the customary range, with a standard error that puts its ends at two of them. */
function middleOf(hint: LitreHint): Estimate {
  return { value: (hint.lowLPerT + hint.highLPerT) / 2, standardError: (hint.highLPerT - hint.lowLPerT) / 4, df: Infinity };
}

function tankOf(mustL: Estimate, tank: TankView): LotSummary['tank'] {
  const { workingL, chanceOfFit, chanceBelowMinimum } = fitTank(mustL, { volumeL: tank.litres, fillShare: tank.workingFill, minimumL: tank.litres * tank.minimumFill });
  return { tankId: tank.id, name: tank.name, workingL, chanceOfFit, chanceBelowMinimum };
}

function sum<Item>(items: readonly Item[], of: (item: Item) => number): number {
  return items.reduce((total, item) => total + of(item), 0);
}
