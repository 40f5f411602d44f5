import { encodeCells } from '../../../shared/analysis/cellBytes.ts';
import { cellAt } from '../../../shared/analysis/grid.ts';
import { joinedBands } from '../../../shared/analysis/zoneMemberships.ts';
import { defaultZoningOptions } from '../../../shared/analysis/zoningOptions.ts';
import type { BlockInput, ZoningInput, ZoningReadings, ZoningResult } from '../../../shared/analysis/zoningTypes.ts';
import { zoningOptions, type ZoningRequestOptions } from '../../../shared/contracts/zonings.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import { Clash } from '../../errors.ts';
import { gridOf, loadBlockVines, type BlockVines } from '../../ground/blockVines.ts';
import { loadBlockLayers, zoningLayer } from '../../ground/zoneLayers.ts';
import { zonedReadings } from '../../ground/zonedReadings.ts';
import { computeInJob } from '../../jobs/computeInJob.ts';
import type { JobHandler } from '../../jobs/handlers.ts';
import type { Job } from '../../models/Job.ts';
import { Zoning } from '../../models/Zoning.ts';
import { ZoningCandidate } from '../../models/ZoningCandidate.ts';
import { plainFigures } from './plainFigures.ts';
import { say } from '../../sentences/say.ts';

/** Measures of fruit that may confirm zones; they never make them. */
const fruitMeasures = ['brix', 'ph', 'ta', 'clusterWeight', 'clusterCount'];

/** Computes a zoning and stores the record with a candidate for each number of zones. */
export const zoningJob: JobHandler = {
  work: async (context) => {
    const { estateId, subjectId } = context.job;
    const zoning = await Zoning.query().findOne({ estateId, id: subjectId }).throwIfNotFound();
    const ground = await loadBlockVines(estateId, zoning.blockId);
    const input = await inputOf(zoning, ground);
    const result = await computeInJob<ZoningResult>(context, 'zoning', input);
    // The last word before anything is kept: throws when the job was cancelled while its thread finished.
    await context.report('store', 1);
    await storeResult(zoning, result, daysOfFruit(input));
    return { zoningId: zoning.id, advisedZones: result.advisedK };
  },
  failed: async (job: Job) => {
    await Zoning.query().where({ estateId: job.estateId, id: job.subjectId, state: 'running' }).patch({ state: 'failed' });
  },
};

/** Everything that decides the outcome, from what is stored: the same record gives the same zones. */
async function inputOf(zoning: Zoning, ground: BlockVines): Promise<ZoningInput> {
  const options = zoningOptions.parse(zoning.options);
  if (zoning.gridKey !== gridOf(ground).key) throw new Clash('outlineChanged', say('outlineChangedSinceAsked', { block: ground.block.name }));
  const together = await Promise.all(options.withBlocks.map(async (blockId) => blockInput(zoning, await loadBlockVines(zoning.estateId, blockId), options)));
  const { zones, standardise, smoothingM, smallestPatchHa, narrowestRows, borders, principalComponents } = options;
  return { ...(await blockInput(zoning, ground, options)), together, options: { ...defaultZoningOptions, zones, standardise, smoothingM, smallestPatchHa, narrowestM: narrowestRows * ground.block.rowSpacingM, borders, principalComponents, seed: zoning.seed, drawAll: true, memberships: true } };
}

async function blockInput(zoning: Zoning, ground: BlockVines, options: ZoningRequestOptions): Promise<BlockInput> {
  const grid = gridOf(ground);
  const found = await loadBlockLayers(zoning.estateId, ground.block.id, options.layers.map(({ layerId }) => layerId));
  const layers = found.map((entry) => zoningLayer(entry, options.layers.find(({ layerId }) => layerId === entry.layer.id)!.weight));
  const hasBordersAlongRows = options.borders !== 'free' && ground.vines.count > 0;
  return { grid, layers, readings: await fruitOf(zoning, ground, grid), ...(hasBordersAlongRows ? { planting: { rows: ground.rows, vines: ground.vines } } : {}) };
}

/** The newest visit of each measure of fruit, up to the moment the zoning was asked for: of its own season, or of an earlier one where that has none yet. */
async function fruitOf(zoning: Zoning, ground: BlockVines, grid: ZoningInput['grid']): Promise<ZoningReadings[]> {
  const readings = await zonedReadings(zoning.estateId, { ground, zoneOf: new Uint8Array(ground.vines.count), until: zoning.createdAt });
  const counted = readings.filter((reading) => reading.excludedReason === null && reading.vine >= 0 && fruitMeasures.includes(reading.measureCode));
  return [...groupBy(counted, (reading) => reading.measureCode)].map(([measure, all]) => {
    const newest = all.reduce((latest, { visit }) => (visit > latest ? visit : latest), '');
    const values = all.filter(({ visit }) => visit === newest).map(({ vine, value }) => ({ cell: cellAt(grid, [ground.vines.x[vine]!, ground.vines.y[vine]!]), row: ground.stored[ground.vines.row[vine]!]!.id, value }));
    return { measure, on: newest, values };
  });
}

/** Days on which each measure of fruit was read, over all blocks that were zoned together. */
function daysOfFruit({ readings = [], together = [] }: ZoningInput): Record<string, string[]> {
  const all = [...readings, ...together.flatMap((block) => block.readings ?? [])];
  return Object.fromEntries([...groupBy(all, ({ measure }) => measure)].map(([measure, own]) => [measure, [...new Set(own.flatMap(({ on }) => on ?? []))].sort()]));
}

async function storeResult(zoning: Zoning, result: ZoningResult, fruitDays: Record<string, string[]>): Promise<void> {
  const { verdict, evidence, candidates, advisedWeights, layerPairs, weights, alsoOffer, bestSeveral, warnings, fruit, componentShares, cellSizeM, standsOut } = result;
  await Zoning.transaction(async (trx) => {
    const stillWanted = await Zoning.query(trx).findOne({ estateId: zoning.estateId, id: zoning.id, state: 'running' }).forUpdate().select('id');
    if (!stillWanted) return;
    await ZoningCandidate.query(trx).where({ estateId: zoning.estateId, zoningId: zoning.id }).delete();
    await ZoningCandidate.query(trx).insert(
      candidates.map(({ k, labels, doubt, memberships, zones }) => ({
        estateId: zoning.estateId, zoningId: zoning.id, zoneCount: k, labels: Buffer.from(encodeCells(labels)), doubt: Buffer.from(encodeCells(doubt)),
        memberships: memberships === null ? null : Buffer.from(encodeCells(joinedBands(memberships))),
        zones: plainFigures({ zones: zones.map((zone) => ({ ...zone, polygonsXY: null })) }),
      })),
    );
    await Zoning.query(trx).where({ estateId: zoning.estateId, id: zoning.id }).patch({
      state: 'proposed', engineVersion: result.engineVersion, verdict: plainFigures(verdict), advisedZones: result.advisedK,
      evidence: plainFigures({ rows: evidence, advisedWeights, layerPairs, weights, alsoOffer, bestSeveral, warnings, fruit, fruitDays, componentShares, cellSizeM, standsOut }),
    });
  });
}
