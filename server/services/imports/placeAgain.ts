import type { ImportAnswers } from '../../../shared/contracts/imports.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import { ImportProblem } from '../../importers/importProblem.ts';
import { computeInJob } from '../../jobs/computeInJob.ts';
import type { JobContext } from '../../jobs/runner.ts';
import { BlockLayer } from '../../models/BlockLayer.ts';
import { FileImport } from '../../models/FileImport.ts';
import { Layer } from '../../models/Layer.ts';
import type { PlacedLayer } from '../../placing/placed.ts';
import { blockLayer } from './blockLayerRow.ts';
import { keptOverride } from './keptOverride.ts';
import { withSource } from './source.ts';
import { targetBlocks } from './whereabouts.ts';

/** Each file again, on a block whose grid is new. Files that do not reach it leave it without their layers. */
export async function placeAllOn(context: JobContext): Promise<unknown> {
  const { estateId, subjectId: blockId } = context.job;
  const blocks = await targetBlocks(estateId, { blockId: blockId!, withRows: true });
  if (blocks.length === 0) return { placed: 0 };
  const layers = groupBy(await Layer.query().where({ estateId }).whereNull('retiredAt').whereNotNull('importId').orderBy('createdAt'), (layer) => layer.importId!);
  const records = await FileImport.query().where({ estateId }).findByIds([...layers.keys()]);
  let done = 0;
  for (const record of records) {
    await context.report('placing', done / records.length);
    const placed = await withSource(record, answersNow(record, layers.get(record.id)!), (source) => computeInJob<PlacedLayer[]>({ report: async () => undefined }, 'placeFile', { source, blocks })).catch((error: unknown) => {
      // A layer that lies elsewhere is none of this block's.
      if (error instanceof ImportProblem) return [];
      throw error;
    });
    await replaceOn([blockId!], layers.get(record.id)!, placed);
    done += 1;
  }
  return { placed: done };
}

/** One layer, and what follows from it, from its file again: the answers about the file have changed. */
export async function placeLayerAgain(context: JobContext): Promise<unknown> {
  const { estateId, subjectId } = context.job;
  const layer = await Layer.query().findOne({ estateId, id: subjectId }).whereNull('retiredAt').whereNotNull('importId').throwIfNotFound();
  const record = await FileImport.query().findOne({ estateId, id: layer.importId }).throwIfNotFound();
  const blocks = await targetBlocks(estateId, { withRows: record.answers.canopy === 'rows' });
  const layers = await Layer.query().where({ estateId, importId: record.id }).whereNull('retiredAt').orderBy('createdAt');
  const placed = await withSource(record, answersNow(record, layers), (source) => computeInJob<PlacedLayer[]>(context, 'placeFile', { source, blocks }));
  await replaceOn(blocks.map((block) => block.id), layers, placed);
  return { placed: placed.length };
}

/** What was told about the file, with the day that somebody gave its layer afterwards. */
function answersNow({ answers }: FileImport, layers: readonly Layer[]): ImportAnswers {
  const { measuredOn } = layers.find(({ derivedFrom }) => derivedFrom === null) ?? layers[0]!;
  return { ...answers, capturedOn: measuredOn };
}

async function replaceOn(blockIds: readonly string[], layers: readonly Layer[], placed: readonly PlacedLayer[]): Promise<void> {
  await BlockLayer.transaction(async (trx) => {
    const { estateId } = layers[0]!;
    const here = () => BlockLayer.query(trx).where({ estateId }).whereIn('blockId', [...blockIds]).whereIn('layerId', layers.map((layer) => layer.id));
    const before = await here().forUpdate().select('layerId', 'blockId', 'findings', 'override');
    await here().delete();
    const rows = layers.flatMap((layer) =>
      (placed.find((each) => each.type === layer.type)?.blocks ?? []).map((cells) => {
        const row = before.find(({ layerId, blockId }) => layerId === layer.id && blockId === cells.blockId);
        return { ...blockLayer(estateId, layer.id, cells), ...keptOverride(row, cells.findings) };
      }),
    );
    if (rows.length > 0) await BlockLayer.query(trx).insert(rows);
  });
}
