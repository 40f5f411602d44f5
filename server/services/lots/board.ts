import { zoneSpan } from '../../../shared/catalog/zoneStyles.ts';
import { scaled } from '../../../shared/cellar/dependent.ts';
import type { LotView, LotZone, LotsBoard, TankView } from '../../../shared/contracts/lots.ts';
import type { Access } from '../../access/access.ts';
import { Missing } from '../../errors.ts';
import { censusKnownFrom, isBearing } from '../../ground/blockVines.ts';
import { endOfEstateDay } from '../../ground/estateDay.ts';
import { peopleWhoMay } from '../../ground/peopleWhoMay.ts';
import { Scenario } from '../../models/Scenario.ts';
import { Tank } from '../../models/Tank.ts';
import { loadBoardGround, type BoardBlock, type BoardGround, type Then } from './boardGround.ts';
import { lotsThen } from './lotsThen.ts';
import { pickStops } from './pickStops.ts';
import { usedFactors } from './usedFactors.ts';
import { summariseLot, withoutZone, type LotShare } from './summariseLot.ts';
import { boardConfidence, figureOf } from './zoneOutlook.ts';
import { say } from '../../sentences/say.ts';

/**
 * The lots of a scenario, every zone with what is free of it, and the tanks. Without a scenario: the live one of the
 * season. With `knownOn` as all of it stood and was known at the end of that day.
 */
export async function lotsBoard(access: Access, options: { scenarioId: string | null; today: string; knownOn?: string | null }): Promise<LotsBoard> {
  const scenario = await findScenario(access, { ...options, today: options.knownOn ?? options.today });
  const scenarios = await Scenario.query().where({ estateId: access.estateId, seasonId: scenario.seasonId }).orderBy('createdAt');
  const then = options.knownOn ? await thenOf(access.estateId, scenario.id, await endOfEstateDay(access.estateId, options.knownOn)) : null;
  const tanks = byName(then?.stood.tanks ?? (await listTanks(access)));
  const ground = await loadBoardGround(access.estateId, scenario, await usedFactors(access.estateId, then), then);
  const lots = await withStops(access.estateId, ground.lots.map((_, index) => lotView(ground, index, tanks)), then?.until ?? null);
  return {
    scenarioId: scenario.id,
    suggestion: scenario.suggestion as LotsBoard['suggestion'],
    scenarios: scenarios.map(({ id, name, isLive }) => ({ id, name, isLive })),
    seasonId: scenario.seasonId,
    confidence: boardConfidence,
    alcoholMethod: ground.alcoholMethod,
    zones: ground.blocks.flatMap((block) => block.zones.map((_, index) => zoneLine(ground, block, index))),
    lots,
    tanks,
    mayLift: (await peopleWhoMay(undefined, access.estateId, 'restrictions.lift')).map(({ name }) => name),
    knownOn: options.knownOn ?? null,
    censusFrom: await censusKnownFrom(access.estateId, ground.blocks.map((one) => one.ground.block), then?.until ?? null),
  };
}

async function thenOf(estateId: string, scenarioId: string, until: Date): Promise<Then> {
  return { until, stood: await lotsThen(estateId, scenarioId, until) };
}

async function withStops(estateId: string, lots: Omit<LotView, 'stops'>[], at: Date | null): Promise<LotView[]> {
  const dated = lots.flatMap(({ id, pickOn }) => (pickOn === null ? [] : [{ lotId: id, pickOn }]));
  const stops = await pickStops(estateId, dated, { at });
  return lots.map((lot) => ({ ...lot, stops: stops.get(lot.id) ?? [] }));
}

export async function findScenario(access: Access, options: { scenarioId: string | null; today: string }): Promise<Scenario> {
  const query = Scenario.query().where('scenarios.estateId', access.estateId);
  const found = options.scenarioId
    ? await query.findOne({ 'scenarios.id': options.scenarioId })
    : await query
        .where({ isLive: true })
        .join('seasons', 'seasons.id', 'scenarios.seasonId')
        .orderByRaw('(seasons.starts_on <= ?::date and seasons.ends_on >= ?::date) desc, seasons.starts_on desc', [
          options.today,
          options.today,
        ])
        .select('scenarios.*')
        .first();
  if (!found) throw new Missing(say('noSeasonLots'));
  return found;
}

/** T2 before T10. */
function byName<Named extends { name: string }>(rows: readonly Named[]): Named[] {
  return [...rows].sort((a, b) => a.name.localeCompare(b.name, undefined, { numeric: true }));
}

export async function listTanks(access: Access): Promise<TankView[]> {
  const rows = await Tank.query().where({ estateId: access.estateId }).whereNull('retiredAt');
  return byName(rows).map(({ id, name, litres, workingFill, minimumFill }) => ({ id, name, litres, workingFill, minimumFill }));
}

/** All lots of a board's ground, as the board shows them. */
export async function lotViews(access: Access, ground: BoardGround): Promise<LotView[]> {
  const tanks = await listTanks(access);
  return withStops(access.estateId, ground.lots.map((_, index) => lotView(ground, index, tanks)), null);
}

function zoneLine(ground: BoardGround, block: BoardBlock, index: number): LotZone {
  const zone = block.zones[index]!;
  const outlook = block.outlooks[index]!;
  const shares = sharesOf(block, zone.number);
  const inLots = ground.lots.map((lot, at) => ({ lotId: lot.id, lotName: lot.name, share: shares.byLot.get(at) ?? 0 })).filter((entry) => entry.share > 0);
  const freeShare = Math.max(0, 1 - inLots.reduce((sum, entry) => sum + entry.share, 0));
  const latest = (code: 'brix' | 'ph' | 'ta') => {
    const mean = outlook.latest[code];
    return mean === null ? null : figureOf(mean.estimate, { n: mean.n, kind: 'measured' });
  };
  return {
    zoneId: zone.id,
    blockId: block.ground.block.id,
    blockName: block.ground.block.name,
    variety: block.ground.block.variety,
    number: zone.number,
    zoneCount: zoneSpan(block.zones),
    name: zone.name,
    areaHa: zone.areaM2 / 10_000,
    vines: outlook.vines,
    bearing: outlook.bearing,
    tonnes: figureOf(outlook.tonnes, { n: null, kind: outlook.parts.some((part) => part.kind === 'measured' && part.n !== null) ? 'estimated' : 'assumed' }),
    yieldParts: outlook.parts,
    dominating: outlook.yield.dominating,
    latest: { brix: latest('brix'), ph: latest('ph'), ta: latest('ta'), on: outlook.latestOn },
    unchecked: outlook.unchecked,
    freeShare,
    freeTonnes: freeShare * outlook.tonnes.value,
    rows: rowsAcross(block, zone.number),
    inLots,
  };
}

/** Share of a zone's bearing vines in each lot. */
function sharesOf(block: BoardBlock, zone: number): { byLot: Map<number, number>; bearing: number } {
  const counts = new Map<number, number>();
  let bearing = 0;
  block.zoneOf.forEach((of, vine) => {
    if (of !== zone || !isBearing(block.ground.states[vine]!)) return;
    bearing += 1;
    const lot = block.lotOf[vine]!;
    if (lot >= 0) counts.set(lot, (counts.get(lot) ?? 0) + 1);
  });
  return { byLot: new Map([...counts].map(([lot, count]) => [lot, count / bearing])), bearing };
}

function lotView(ground: BoardGround, index: number, tanks: TankView[]): Omit<LotView, 'stops'> {
  const lot = ground.lots[index]!;
  const shares = ground.blocks.flatMap((block) => lotShares(block, index));
  return {
    id: lot.id,
    name: lot.name,
    wineType: lot.wineType,
    state: lot.state,
    pickOn: lot.pickOn,
    tankId: lot.tankId,
    version: lot.version,
    crew: lot.crew,
    alcoholMethod: lot.alcoholMethod ?? null,
    lines: shares.map(({ block, zone, outlook, vines, bearing, share, rowIds }, at) => ({
      without: withoutZone(shares, at),
      rowIds,
      zoneId: zone.id,
      blockId: block.ground.block.id,
      blockName: block.ground.block.name,
      number: zone.number,
      zoneCount: zoneSpan(block.zones),
      name: zone.name,
      vines,
      bearing,
      share,
      areaHa: (share * zone.areaM2) / 10_000,
      tonnes: figureOf(scaled(outlook.tonnes, share), { n: null, kind: 'estimated' }),
    })),
    summary: summariseLot(shares, { wineType: lot.wineType, tank: tanks.find((tank) => tank.id === lot.tankId) ?? null, factors: ground.factors, alcoholMethod: lot.alcoholMethod ?? ground.alcoholMethod }),
  };
}

/** The zones, or parts of zones, of one block in a lot: by today's zones, whatever they were when the lot was made. */
function lotShares(block: BoardBlock, lot: number): LotShare[] {
  return block.zones.flatMap((zone, index) => {
    const mine = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === zone.number && block.lotOf[vine] === lot);
    if (mine.length === 0) return [];
    const outlook = block.outlooks[index]!;
    const bearing = mine.filter((vine) => isBearing(block.ground.states[vine]!)).length;
    return [{ block, zone, outlook, vines: mine.length, bearing, rowIds: mine.length === outlook.vines ? null : rowsOf(block, mine), share: outlook.bearing > 0 ? bearing / outlook.bearing : 0 }];
  });
}

/** Rows that the vines stand in, in order. */
function rowsOf({ ground }: BoardBlock, vines: number[]): string[] {
  return [...new Set(vines.map((vine) => ground.vines.row[vine]!))].map((row) => ground.stored[row]!.id);
}

function rowsAcross({ ground, zoneOf, lotOf }: BoardBlock, zone: number): LotZone['rows'] {
  const isFree = new Map<number, boolean>();
  zoneOf.forEach((of, vine) => {
    if (of === zone) isFree.set(ground.vines.row[vine]!, (isFree.get(ground.vines.row[vine]!) ?? true) && lotOf[vine]! < 0);
  });
  return [...isFree].sort(([a], [b]) => a - b).map(([row, free]) => ({ id: ground.stored[row]!.id, label: ground.stored[row]!.label, free }));
}
