import type { Transaction } from 'objection';
import { reachOf } from '../../../shared/catalog/permissions.ts';
import { layerType } from '../../../shared/catalog/layerTypes.ts';
import { zoningOptions, type NewZoning, type ZoningRequestOptions } from '../../../shared/contracts/zonings.ts';
import { ENGINE_VERSION } from '../../../shared/analysis/zoningFinish.ts';
import { smallestPatchFor } from '../../../shared/analysis/smallestPatch.ts';
import type { Access } from '../../access/access.ts';
import { Clash, NotAllowed, Unusable } from '../../errors.ts';
import { loadBlockLayers } from '../../ground/zoneLayers.ts';
import { enqueueJob } from '../../jobs/queue.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import type { Layer } from '../../models/Layer.ts';
import { Zoning } from '../../models/Zoning.ts';
import { readinessOf } from '../layers/view.ts';
import { say } from '../../sentences/say.ts';
import { seasonOn } from './seasonOn.ts';

const leastCoverage = 0.6;

interface Asked {
  zoningId: string;
  jobId: string;
}

/**
 * Asks for a zoning of a block; it runs in the background. Whoever may only propose repeats a recipe that is stored. Blocks zoned
 * together get a zoning each; every one is computed from all of them, so each can be repeated by itself.
 */
export async function requestZoning(access: Access, blockId: string, input: NewZoning, today: string): Promise<Asked & { together: (Asked & { blockId: string })[] }> {
  const withBlocks = [...new Set(input.withBlocks)].filter((id) => id !== blockId);
  const all = [blockId, ...withBlocks];
  const blocks = await Promise.all(all.map((id) => Block.query().findOne({ estateId: access.estateId, id }).whereNull('retiredAt').throwIfNotFound()));
  const options = zoningOptions.parse({ ...input, withBlocks, smallestPatchHa: input.smallestPatchHa ?? smallestPatchFor(blocks[0]!.areaM2) });
  if (reachOf(access.roles, 'zoning.run') !== 'do') await requireKnownRecipe(access, blockId, options);
  for (const block of blocks) await requireUsableLayers(access, block, options);
  const season = await seasonOn(access.estateId, today);
  return Zoning.transaction(async (trx) => {
    const made: (Asked & { blockId: string })[] = [];
    for (const block of blocks) made.push({ blockId: block.id, ...(await insertZoning(trx, access, { block, seasonId: season.id, input, options: { ...options, withBlocks: all.filter((id) => id !== block.id) } })) });
    const [{ zoningId, jobId } = made[0]!, ...together] = made;
    return { zoningId, jobId, together };
  });
}

async function insertZoning(trx: Transaction, access: Access, { block, seasonId, input, options }: { block: Block; seasonId: string; input: NewZoning; options: ZoningRequestOptions }): Promise<Asked> {
  await Block.query(trx).findOne({ estateId: access.estateId, id: block.id }).forUpdate();
  const [last] = (await Zoning.query(trx).where({ estateId: access.estateId, blockId: block.id }).max('number as number')) as unknown as { number: number | null }[];
  const zoning = await Zoning.query(trx).insert({
    estateId: access.estateId, blockId: block.id, seasonId, number: (last?.number ?? 0) + 1, name: input.name, state: 'running',
    options, seed: input.seed, engineVersion: ENGINE_VERSION, gridKey: block.gridKey, createdBy: access.personId,
  });
  const jobId = await enqueueJob(trx, access, { kind: 'zoning', subjectType: 'zoning', subjectId: zoning.id });
  await writeAudit(trx, access, { action: 'zoning.run', subjectType: 'zoning', subjectId: zoning.id, subjectName: block.name, after: { ...options, seed: input.seed } });
  return { zoningId: zoning.id, jobId };
}

async function requireKnownRecipe(access: Access, blockId: string, options: ReturnType<typeof zoningOptions.parse>): Promise<void> {
  const earlier = await Zoning.query().where({ estateId: access.estateId, blockId }).select('options');
  const wanted = JSON.stringify(options);
  const isKnown = earlier.some(({ options: stored }) => {
    const recipe = zoningOptions.safeParse(stored);
    return recipe.success && JSON.stringify(recipe.data) === wanted;
  });
  if (!isKnown) throw new NotAllowed(say('onlyAsItWas'));
}

/** Advice leaves context out beside a measured layer, also beside one that a person gave no weight: nothing would be left to zone from. */
function requireVoice(layers: readonly Layer[], weights: ReadonlyMap<string, number | null>): void {
  const measured = layers.filter(({ type }) => layerType(type).role === 'evidence' && layerType(type).resampling !== 'class');
  const votes = (layer: Layer) => (weights.get(layer.id) ?? Number(measured.length === 0 || measured.includes(layer))) > 0;
  if (!layers.some(votes)) throw new Unusable('noWeight', say('noWeight'));
}

/** A layer with red findings keeps out of zoning unless somebody answers for it by name. */
async function requireUsableLayers(access: Access, block: Block, options: ZoningRequestOptions): Promise<void> {
  const layerIds = options.layers.map(({ layerId }) => layerId);
  const found = await loadBlockLayers(access.estateId, block.id, layerIds);
  if (found.length < new Set(layerIds).size) throw new Unusable('layerMissing', say('layerMissing', { block: block.name }));
  requireVoice(found.map(({ layer }) => layer), new Map(options.layers.map(({ layerId, weight }) => [layerId, weight])));
  for (const { layer, placed } of found) {
    const readiness = readinessOf(placed, block.gridKey);
    if (readiness === 'stale') throw new Clash('layerStale', say('layerOutOfDate', { layer: layer.name, block: block.name }));
    if (readiness === 'blocked') throw new Unusable('layerBlocked', say('layerBlocked', { layer: layer.name }));
    if (placed.coverage < leastCoverage && readiness !== 'overridden') throw new Unusable('layerCoverage', say('layerCoverage', { layer: layer.name, percent: Math.round(placed.coverage * 100), block: block.name, least: leastCoverage * 100 }));
  }
}
