import { decodeFloatCells, decodeLabels } from '../../../shared/analysis/cellBytes.ts';
import { cellAt, type Cells, type Grid, type Labels } from '../../../shared/analysis/grid.ts';
import { rowRuns, snapToRows } from '../../../shared/analysis/snapToRows.ts';
import { layerType } from '../../../shared/catalog/layerTypes.ts';
import type { PlanBasis } from '../../../shared/contracts/planBasis.ts';
import type { PlanChoices } from '../../../shared/contracts/planChoices.ts';
import type { ZoneDivision } from '../../../shared/contracts/plans.ts';
import { divisionsAlong, judgeParts, partMeans, type Demand, type Division, type LocatedReading } from '../../../shared/sampling/divideZone.ts';
import { answerPlan, type PlanAnswer } from '../../../shared/sampling/plan.ts';
import { membersOf } from '../../../shared/sampling/pooledZones.ts';
import type { Access } from '../../access/access.ts';
import { gridOf } from '../../ground/blockVines.ts';
import { zonedReadings, type ZonedReading } from '../../ground/zonedReadings.ts';
import { BlockLayer } from '../../models/BlockLayer.ts';
import { Layer } from '../../models/Layer.ts';
import { loadPlanBasis } from './planBasis.ts';
import { loadPlanGround, type PlanGround } from './planGround.ts';

/** Shortest run of vines along a row that a divided zone gives away, in metres. */
const shortestRunM = 20;
/** Cuts of a layer, cheapest first, that are judged as they would be drawn: runs along rows may spoil the cheapest and spare its neighbour. */
const cutsDrawn = 8;

interface LayerOnVines {
  id: string;
  name: string;
  cells: Cells;
  /** Value at each vine of the table; NaN where the layer says nothing. */
  atVines: Float64Array;
}

/** For each zone that the plan asks too much of: the cut along one layer that saves most, where the readings suffice to judge. */
export async function divisionsOf(access: Access, zoningId: string, choices: PlanChoices): Promise<ZoneDivision[]> {
  const { estateId } = access;
  const planGround = await loadPlanGround(estateId, zoningId, choices.draw);
  const basis = await loadPlanBasis(estateId, planGround, choices.spread);
  const answer = answerPlan(basis, choices);
  if (answer.advice === null) return [];
  const [layers, readings] = await Promise.all([layersOnVines(estateId, planGround), zonedReadings(estateId, planGround)]);
  const usable = readings.filter(({ vine, excludedReason, state }) => vine >= 0 && excludedReason === null && state !== 'provisional');
  // Zones sampled as one are not divided again: they are parted first.
  const single = answer.advice.zonesOver.filter((zone) => membersOf(choices.pools, Number(zone)).length === 1);
  return single.flatMap((zone) => divideZone({ zone, basis, answer, choices, layers, readings: usable, planGround }) ?? []);
}

interface DivideAsk {
  zone: string;
  basis: PlanBasis;
  answer: PlanAnswer;
  choices: PlanChoices;
  layers: LayerOnVines[];
  readings: ZonedReading[];
  planGround: PlanGround;
}

function divideZone(ask: DivideAsk): ZoneDivision | null {
  const { zone, answer, layers, readings, planGround } = ask;
  const at = answer.question.zones.findIndex((one) => one.zone === zone);
  const code = answer.counts.zones[at]!.drivers[0];
  if (code === undefined) return null;
  const own = readings.filter((reading) => String(reading.zone) === zone && reading.measureCode === code);
  const ofZone = [...planGround.zoneOf.keys()].filter((vine) => String(planGround.zoneOf[vine]) === zone);
  const demand = demandOf(ask, at, code);
  let best: DrawnDivision | null = null;
  for (const layer of layers) {
    const located: LocatedReading[] = own.flatMap(({ value, visit, vine }) => (Number.isNaN(layer.atVines[vine]!) ? [] : [{ value, visit, layer: layer.atVines[vine]! }]));
    const layerAtVines = ofZone.map((vine) => layer.atVines[vine]!).filter((value) => !Number.isNaN(value));
    for (const { cut } of divisionsAlong({ ...demand, readings: located, layerAtVines }).slice(0, cutsDrawn)) {
      const drawn = drawnDivision(ask, { layer, cut, own, ofZone, demand });
      if (drawn && (best === null || drawn.division.total < best.division.total)) best = drawn;
    }
  }
  if (best === null) return null;
  const { layer, division, means, given } = best;
  return { zone, measureCode: code, layerId: layer.id, layerName: layer.name, division: { ...division, vines: [...division.vines], spreads: [...division.spreads], counts: [...division.counts] }, means: [...means], newZone: newZoneOf(ask), rows: runsOf(planGround, given) };
}

interface DrawnDivision {
  layer: LayerOnVines;
  division: Division;
  means: readonly [number, number];
  /** 1 at vines that the second part takes. */
  given: Uint8Array;
}

/** A cut as it will be drawn along the rows: promised is what those parts ask for, not what the layer's own line would. */
function drawnDivision(ask: DivideAsk, { layer, cut, own, ofZone, demand }: { layer: LayerOnVines; cut: number; own: ZonedReading[]; ofZone: number[]; demand: Demand }): DrawnDivision | null {
  const given = vinesOfPart(ask.planGround, { zone: Number(ask.zone), newZone: newZoneOf(ask), layer, cut });
  const sides = [own.filter(({ vine }) => given[vine] === 0), own.filter(({ vine }) => given[vine] === 1)] as const;
  const taken = ofZone.filter((vine) => given[vine] === 1).length;
  const division = judgeParts(demand, { cut, sides, vines: [ofZone.length - taken, taken] });
  return division && { layer, division, means: partMeans(sides), given };
}

const newZoneOf = ({ basis }: DivideAsk) => Math.max(...basis.zones.map(({ number }) => number)) + 1;

/** What the measure that drives the zone asks for, on the scale its spread is kept in. */
function demandOf({ answer, choices, basis }: DivideAsk, at: number, code: string): Demand {
  const measure = answer.question.measures.find((one) => one.code === code)!;
  const { kind } = measure.spreads[at]!;
  const mean = Math.abs(measure.expectedMeans[at] ?? Number.NaN);
  const isShare = measure.margin.kind === 'relative';
  const margin = kind === 'cv' ? (isShare ? measure.margin.value : measure.margin.value / mean) : isShare ? measure.margin.value * mean : measure.margin.value;
  const presentCount = answer.counts.zones[at]!.counts[answer.question.measures.indexOf(measure)]!;
  return { margin, confidence: measure.confidence, kind, presentCount, wanted: choices.question === 'block' ? 'whole' : 'parts', minimum: choices.minimum ?? basis.settings.floorVines };
}

/** Layers of numbers that lie on the block as it is now. */
async function layersOnVines(estateId: string, { ground }: PlanGround): Promise<LayerOnVines[]> {
  const grid = gridOf(ground);
  const placed = await BlockLayer.query().where({ estateId, blockId: ground.block.id, gridKey: grid.key });
  const layers = await Layer.query().where({ estateId }).whereNull('retiredAt').findByIds(placed.map(({ layerId }) => layerId));
  return layers.filter(({ type }) => layerType(type).resampling !== 'class').map(({ id, name }) => {
    const cells = decodeFloatCells(placed.find(({ layerId }) => layerId === id)!.cells);
    return { id, name, cells, atVines: Float64Array.from(ground.vines.x, (x, vine) => valueAt(grid, cells, [x, ground.vines.y[vine]!])) };
  });
}

function valueAt(grid: Grid, cells: Cells, xy: [number, number]): number {
  const cell = cellAt(grid, xy);
  return cell < 0 ? Number.NaN : cells[cell]!;
}

/** The second part in runs along the rows, none shorter than a crew would stop for. */
function vinesOfPart({ zoning, ground, zoneOf }: PlanGround, part: { zone: number; newZone: number; layer: LayerOnVines; cut: number }): Uint8Array {
  const grid = gridOf(ground);
  const labels = new Uint8Array(decodeLabels(zoning.labels!)) as Labels;
  labels.forEach((label, cell) => {
    if (label === part.zone && part.layer.cells[cell]! > part.cut) labels[cell] = part.newZone;
  });
  const { vineLabels } = snapToRows({ grid, labels, rows: ground.rows, vines: ground.vines }, { mode: 'partRow', shortestRunM });
  return Uint8Array.from(vineLabels, (label, vine) => (label === part.newZone && zoneOf[vine] === part.zone ? 1 : 0));
}

function runsOf({ ground }: PlanGround, given: Uint8Array): ZoneDivision['rows'] {
  return rowRuns(ground.vines, given).filter(({ label }) => label === 1).map(({ rowIndex, fromOrdinal, toOrdinal }) => ({ rowId: ground.stored[rowIndex]!.id, from: fromOrdinal, to: toOrdinal }));
}
