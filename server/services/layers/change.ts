import { needsDay } from '../../../shared/analysis/layerFindings.ts';
import type { LayerChange, OverrideChange } from '../../../shared/contracts/layers.ts';
import type { Access } from '../../access/access.ts';
import { Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { BlockLayer } from '../../models/BlockLayer.ts';
import { Layer } from '../../models/Layer.ts';
import { Person } from '../../models/Person.ts';
import { storable } from '../../models/storable.ts';
import { say } from '../../sentences/say.ts';

/** Name, unit, day and legend; never the values. */
export async function changeLayer(access: Access, layerId: string, change: LayerChange): Promise<void> {
  await Layer.transaction(async (trx) => {
    const layer = await Layer.query(trx).findOne({ estateId: access.estateId, id: layerId }).whereNull('retiredAt').forUpdate().throwIfNotFound();
    if (change.classes !== undefined) requireSameClasses(layer, change.classes.map((entry) => entry.value));
    await Layer.query(trx).where({ estateId: access.estateId, id: layerId }).patch(change);
    // The day is judged with the layer: naming it answers the finding about a missing one, taking it away brings it back.
    if (change.measuredOn !== undefined && needsDay(layer.type)) await redate(access, layerId, change.measuredOn, trx);
    await writeAudit(trx, access, { action: 'layer.change', subjectType: 'layer', subjectId: layerId, subjectName: layer.name, before: { name: layer.name, unit: layer.unit, measuredOn: layer.measuredOn, classes: layer.classes }, after: change });
  });
}

/** Uses a layer in spite of red findings; who and why stays with it. */
export async function overrideLayer(access: Access, layerId: string, { blockId, reason }: OverrideChange, now: Date): Promise<void> {
  await BlockLayer.transaction(async (trx) => {
    const layer = await Layer.query(trx).findOne({ estateId: access.estateId, id: layerId }).whereNull('retiredAt').throwIfNotFound();
    const here = await BlockLayer.query(trx).findOne({ estateId: access.estateId, layerId, blockId }).forUpdate().throwIfNotFound();
    if (!here.findings.some((finding) => finding.severity === 'red')) throw new Unusable('nothingRed', say('nothingRed', { layer: layer.name }));
    const person = await Person.query(trx).findById(access.personId).throwIfNotFound();
    await BlockLayer.query(trx)
      .where({ estateId: access.estateId, layerId, blockId })
      .patch(
        storable({
          override: { personId: person.id, by: person.name, reason, at: now.toISOString() },
          findings: here.findings.filter(({ code }) => code !== 'overrideLapsed'),
        }),
      );
    await writeAudit(trx, access, {
      action: 'layer.override',
      subjectType: 'layer',
      subjectId: layerId,
      subjectName: layer.name,
      after: { blockId, findings: here.findings.filter((finding) => finding.severity === 'red').map((finding) => finding.code) },
      reason,
    });
  });
}

/** Takes a layer and what is derived from it out of use; zones made with it stay as they are. */
export async function retireLayer(access: Access, layerId: string, now: Date): Promise<void> {
  await Layer.transaction(async (trx) => {
    const layer = await Layer.query(trx).findOne({ estateId: access.estateId, id: layerId }).whereNull('retiredAt').forUpdate().throwIfNotFound();
    await Layer.query(trx)
      .where({ estateId: access.estateId })
      .where((query) => query.where({ id: layerId }).orWhere({ derivedFrom: layerId }))
      .whereNull('retiredAt')
      .patch({ retiredAt: now });
    await writeAudit(trx, access, { action: 'layer.retire', subjectType: 'layer', subjectId: layerId, subjectName: layer.name });
  });
}

async function redate(access: Access, layerId: string, measuredOn: string | null, trx: Parameters<typeof BlockLayer.query>[0]): Promise<void> {
  const without = `(select coalesce(jsonb_agg(f), '[]'::jsonb) from jsonb_array_elements(findings) f where f->>'code' <> 'noDate')`;
  const noDate = JSON.stringify([{ code: 'noDate', severity: 'amber', params: {} }]);
  await BlockLayer.knex()
    .raw(`update block_layers set findings = ${without} || ?::jsonb where estate_id = ? and layer_id = ? and (findings @> '[{"code": "noDate"}]' or ?)`, [measuredOn === null ? noDate : '[]', access.estateId, layerId, measuredOn === null])
    .transacting(trx as never);
}

function requireSameClasses(layer: Layer, values: readonly number[]): void {
  const known = (layer.classes ?? []).map((entry) => entry.value);
  const same = known.length === values.length && known.every((value) => values.includes(value)) && new Set(values).size === values.length;
  if (!same) throw new Unusable('otherClasses', say('otherClasses', { layer: layer.name, classes: known.join(', ') || '–' }));
}
