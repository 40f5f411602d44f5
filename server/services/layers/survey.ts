import type { AsideReading, CleaningChange } from '../../../shared/contracts/layers.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import { enqueueJob } from '../../jobs/queue.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { BlockLayer } from '../../models/BlockLayer.ts';
import { FileImport } from '../../models/FileImport.ts';
import { Job } from '../../models/Job.ts';
import { Layer } from '../../models/Layer.ts';
import { storable } from '../../models/storable.ts';
import { say } from '../../sentences/say.ts';

/** Readings of a layer that were set aside on a block, where they were taken. */
export async function readAside(access: Access, layerId: string, blockId: string): Promise<AsideReading[]> {
  await Layer.query().findOne({ estateId: access.estateId, id: layerId }).whereNull('retiredAt').throwIfNotFound();
  const here = await BlockLayer.query().findOne({ estateId: access.estateId, layerId, blockId }).select('survey').throwIfNotFound();
  return here.survey?.aside ?? [];
}

/** Takes reasons for setting readings aside back, or lets them hold again: the layer is made anew from its file. Returns the job. */
export async function changeCleaning(access: Access, layerId: string, { taken }: CleaningChange): Promise<string> {
  const { estateId } = access;
  return Layer.transaction(async (trx) => {
    const layer = await Layer.query(trx).findOne({ estateId, id: layerId }).whereNull('retiredAt').forUpdate().throwIfNotFound();
    const surveys = await BlockLayer.query(trx).where({ estateId, layerId }).whereNotNull('survey').resultSize();
    if (layer.importId === null || surveys === 0) throw new Unusable('noPoints', say('noPoints', { layer: layer.name }));
    const open = await Job.query(trx).where({ estateId, subjectType: 'layer', subjectId: layerId }).whereIn('state', ['queued', 'running']).resultSize();
    if (open > 0) throw new Clash('importPlacing', say('layerMadeAnew', { layer: layer.name }));
    const record = await FileImport.query(trx).findOne({ estateId, id: layer.importId }).forUpdate().throwIfNotFound();
    const before = record.answers.takenBack ?? [];
    const answers = { ...record.answers, takenBack: taken };
    await FileImport.query(trx).where({ estateId, id: record.id }).patch(storable({ answers }));
    await Layer.query(trx).where({ estateId, importId: record.id }).patch(storable({ source: { ...layer.source, answers } }));
    await writeAudit(trx, access, { action: 'layer.clean', subjectType: 'layer', subjectId: layerId, subjectName: layer.name, before: { taken: before }, after: { taken } });
    return enqueueJob(trx, access, { kind: 'placeLayer', subjectType: 'layer', subjectId: layerId });
  });
}
