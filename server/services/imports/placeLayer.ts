import type { Transaction } from 'objection';
import { encodeCells } from '../../../shared/analysis/cellBytes.ts';
import type { LayerTypeId } from '../../../shared/catalog/layerTypes.ts';
import { computeInJob } from '../../jobs/computeInJob.ts';
import type { JobHandler } from '../../jobs/handlers.ts';
import type { JobContext } from '../../jobs/runner.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { BlockLayer } from '../../models/BlockLayer.ts';
import { FileImport } from '../../models/FileImport.ts';
import type { Job } from '../../models/Job.ts';
import { Layer } from '../../models/Layer.ts';
import { keepRelief } from '../../models/Relief.ts';
import { storable } from '../../models/storable.ts';
import { StoredFile } from '../../models/StoredFile.ts';
import type { PlacedLayer } from '../../placing/placed.ts';
import { blockLayer } from './blockLayerRow.ts';
import { placeAllOn, placeLayerAgain } from './placeAgain.ts';
import { problemNote } from './receive.ts';
import { withSource } from './source.ts';
import { targetBlocks } from './whereabouts.ts';

/** Places a new layer on every block it covers, all layers of the estate on a block whose grid is new, or one layer again. */
export const placeLayerJob: JobHandler = {
  work: (context) => ({ import: placeImport, block: placeAllOn, layer: placeLayerAgain })[context.job.subjectType as 'import'](context),
  failed: async (job: Job, problem: string) => {
    if (job.subjectType !== 'import') return;
    await FileImport.query().where({ estateId: job.estateId, id: job.subjectId }).where({ state: 'ready' }).patch({ state: 'refused', problem: { code: 'fault', text: problem, params: {} } });
  },
};

async function placeImport(context: JobContext): Promise<unknown> {
  const { estateId, subjectId, createdBy } = context.job;
  const record = await FileImport.query().findOne({ estateId, id: subjectId }).throwIfNotFound();
  if (record.state === 'done') return placedBefore(record);
  const blocks = await targetBlocks(estateId, { withRows: record.answers.canopy === 'rows' });
  const placed = await withSource(record, record.answers, (source) => computeInJob<PlacedLayer[]>(context, 'placeFile', { source, blocks, withRelief: true })).catch(async (error: unknown) => {
    const problem = problemNote(error);
    if (problem !== null) await FileImport.query().where({ estateId, id: record.id, state: 'ready' }).patch(storable({ state: 'refused' as const, problem }));
    throw error;
  });
  return FileImport.transaction(async (trx) => {
    const line = await FileImport.query(trx).findOne({ estateId, id: record.id }).forUpdate().throwIfNotFound();
    if (line.state === 'done') return placedBefore(line);
    const layerIds = await storeLayers(trx, record, placed);
    const { relief } = placed[0]!;
    if (relief && relief.cells.length > 0) await keepRelief(trx, estateId, { ...relief, cells: Buffer.from(encodeCells(relief.cells)) });
    await FileImport.query(trx).where({ estateId, id: record.id }).patch({ state: 'done', problem: null, finishedAt: new Date() });
    await writeAudit(
      trx,
      { estateId, personId: createdBy },
      {
        action: 'layer.place',
        subjectType: 'import',
        subjectId: record.id,
        subjectName: record.fileName,
        after: { layers: placed.map(({ type, blocks: on }) => ({ type, blocks: on.length })) },
      },
    );
    return { layerIds, blocks: placed[0]!.blocks.length };
  });
}

/** A job that ran before, or ran twice after a crash, must not lay the same file down again. */
async function placedBefore({ estateId, id }: FileImport): Promise<{ layerIds: string[]; blocks: number }> {
  const layers = await Layer.query().where({ estateId, importId: id }).orderBy('createdAt');
  const [main] = layers;
  return { layerIds: layers.map((layer) => layer.id), blocks: main ? await BlockLayer.query().where({ estateId, layerId: main.id }).resultSize() : 0 };
}

/** The main layer first: layers that follow from it refer to it. */
async function storeLayers(trx: Transaction, record: FileImport, placed: readonly PlacedLayer[]): Promise<string[]> {
  const { estateId, answers } = record;
  const file = await StoredFile.query(trx).findOne({ estateId, id: record.fileId });
  const name = answers.layerName ?? baseName(record.fileName);
  const ids: string[] = [];
  for (const layer of placed) {
    const made = await Layer.query(trx).insert(
      storable({
        estateId, importId: record.id, derivedFrom: layer.derivedFrom === null ? null : ids[0]!, type: layer.type as LayerTypeId, name, unit: layer.unit, measuredOn: answers.capturedOn ?? null, classes: layer.classes, createdBy: record.createdBy,
        source: { fileName: record.fileName, sha256: file?.sha256 ?? null, value: layer.value, pixelSizeM: layer.pixelSizeM, reference: layer.reference, answers },
      }),
    );
    ids.push(made.id);
    await BlockLayer.query(trx).insert(layer.blocks.map((cells) => blockLayer(estateId, made.id, cells)));
  }
  return ids;
}

function baseName(fileName: string): string {
  return fileName.replace(/\.[^.]*$/, '').slice(0, 80).trim() || fileName.slice(0, 80);
}
