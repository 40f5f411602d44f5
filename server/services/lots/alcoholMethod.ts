import { estateSettings } from '../../../shared/contracts/estate.ts';
import type { BrixMethod } from '../../../shared/contracts/lots.ts';
import type { Access } from '../../access/access.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Estate } from '../../models/Estate.ts';

/** Chooses the way to potential alcohol for the whole estate; who changed it, and from what, stays on record. */
export async function chooseAlcoholMethod(access: Access, method: BrixMethod): Promise<void> {
  await Estate.transaction(async (trx) => {
    const estate = await Estate.query(trx).findById(access.estateId).forUpdate().throwIfNotFound();
    const settings = estateSettings.parse(estate.settings);
    if (settings.alcoholMethod === method) return;
    await Estate.query(trx).findById(access.estateId).patch({ settings: { ...settings, alcoholMethod: method } });
    await writeAudit(trx, access, { action: 'lots.alcoholMethod', subjectType: 'estate', subjectId: access.estateId, subjectName: estate.name, before: { method: settings.alcoholMethod }, after: { method } });
  });
}
