import { decodeLabels } from '../../../shared/analysis/cellBytes.ts';
import type { Cells, Labels } from '../../../shared/analysis/grid.ts';
import { layerType } from '../../../shared/catalog/layerTypes.ts';
import type { PlanBasis } from '../../../shared/contracts/planBasis.ts';
import type { PlanChoices } from '../../../shared/contracts/planChoices.ts';
import type { ZoneDivision } from '../../../shared/contracts/plans.ts';
import type { Demand } from '../../../shared/sampling/divideZone.ts';
import { answerPlan, type PlanAnswer } from '../../../shared/sampling/plan.ts';
import { membersOf } from '../../../shared/sampling/pooledZones.ts';
import type { Access } from '../../access/access.ts';
import { gridOf, isBearing } from '../../ground/blockVines.ts';
import type { DividedZone, DivideZonesInput } from '../../ground/divideZones.ts';
import { zonedReadings } from '../../ground/zonedReadings.ts';
import { storedCells } from '../../ground/zoneLayers.ts';
import { BlockLayer } from '../../models/BlockLayer.ts';
import { Layer } from '../../models/Layer.ts';
import { runCompute } from '../../workers/computePool.ts';
import { loadPlanBasis } from './planBasis.ts';
import { loadPlanGround, type PlanGround } from './planGround.ts';

/** For each zone that the plan asks too much of: the cut along one layer that saves most, where the readings suffice to judge. Cuts are drawn along the rows in a thread. */
export async function divisionsOf(access: Access, zoningId: string, choices: PlanChoices): Promise<ZoneDivision[]> {
  const { estateId } = access;
  const planGround = await loadPlanGround(estateId, zoningId, choices.draw);
  const basis = await loadPlanBasis(estateId, planGround, choices.spread);
  const answer = answerPlan(basis, choices);
  // Zones sampled as one are not divided again: they are parted first.
  const single = answer.advice?.zonesOver.filter((zone) => membersOf(choices.pools, Number(zone)).length === 1) ?? [];
  const driven = single.flatMap((zone) => {
    const at = answer.question.zones.findIndex((one) => one.zone === zone);
    const code = answer.counts.zones[at]!.drivers[0];
    return code === undefined ? [] : [{ zone: Number(zone), at, code }];
  });
  if (driven.length === 0) return [];
  const { zoning, ground, zoneOf } = planGround;
  const [layers, readings] = await Promise.all([layersOn(estateId, planGround), zonedReadings(estateId, planGround)]);
  const usable = readings.filter(({ vine, excludedReason, state }) => vine >= 0 && excludedReason === null && state !== 'provisional');
  const newZone = Math.max(...basis.zones.map(({ number }) => number)) + 1;
  const input: DivideZonesInput = {
    grid: gridOf(ground), labels: decodeLabels(zoning.labels!) as Labels, rows: ground.rows, vines: ground.vines, zoneOf, newZone, layers, bearing: Uint8Array.from(ground.states, (state) => (isBearing(state) ? 1 : 0)),
    zones: driven.map(({ zone, at, code }) => ({
      zone, demand: demandOf({ answer, choices, basis }, at, code),
      readings: usable.filter((reading) => reading.zone === zone && reading.measureCode === code).map(({ value, visit, vine }) => ({ value, visit, vine })),
    })),
  };
  const divided = await runCompute<DividedZone[]>('divideZones', input, { lane: 'quick' });
  return divided.map(({ zone, layerId, division, means, runs }) => ({
    zone: String(zone), measureCode: driven.find((one) => one.zone === zone)!.code, layerId, layerName: layers.find(({ id }) => id === layerId)!.name,
    division: { ...division, vines: [...division.vines], spreads: [...division.spreads], counts: [...division.counts] }, means: [...means], newZone,
    rows: runs.map(({ rowIndex, fromOrdinal, toOrdinal }) => ({ rowId: ground.stored[rowIndex]!.id, from: fromOrdinal, to: toOrdinal })),
  }));
}

/** What the measure that drives the zone asks for, on the scale its spread is kept in. */
function demandOf({ answer, choices, basis }: { answer: PlanAnswer; choices: PlanChoices; basis: PlanBasis }, at: number, code: string): Demand {
  const measure = answer.question.measures.find((one) => one.code === code)!;
  const { kind } = measure.spreads[at]!;
  const mean = Math.abs(measure.expectedMeans[at] ?? Number.NaN);
  const isShare = measure.margin.kind === 'relative';
  const margin = kind === 'cv' ? (isShare ? measure.margin.value : measure.margin.value / mean) : isShare ? measure.margin.value * mean : measure.margin.value;
  const presentCount = answer.counts.zones[at]!.counts[answer.question.measures.indexOf(measure)]!;
  return { margin, confidence: measure.confidence, kind, presentCount, wanted: choices.question === 'block' ? 'whole' : 'parts', minimum: choices.minimum ?? basis.settings.floorVines, outliers: choices.spread.outliers, resolution: 10 ** -basis.measures.find((one) => one.code === code)!.decimals };
}

/** Layers of numbers that lie on the block as it is now. */
async function layersOn(estateId: string, { ground }: PlanGround): Promise<{ id: string; name: string; cells: Cells }[]> {
  const placed = await BlockLayer.query().where({ estateId, blockId: ground.block.id, gridKey: gridOf(ground).key });
  const layers = await Layer.query().where({ estateId }).whereNull('retiredAt').findByIds(placed.map(({ layerId }) => layerId));
  return layers.filter(({ type }) => layerType(type).resampling !== 'class').map((layer) => ({ id: layer.id, name: layer.name, cells: storedCells(layer, placed.find(({ layerId }) => layerId === layer.id)!) }));
}
