import { estateSettings } from '../../../shared/contracts/estate.ts';
import type { BrixMethod } from '../../../shared/contracts/lots.ts';
import type { Access } from '../../access/access.ts';
import { AuditEntry, writeAudit } from '../../models/AuditEntry.ts';
import { Estate } from '../../models/Estate.ts';

const action = 'lots.alcoholMethod';

/** The estate's way to potential alcohol: now, or as it was at a moment. */
export async function alcoholMethodOf(estateId: string, until: Date | null): Promise<BrixMethod> {
  if (until !== null) {
    const later = await AuditEntry.query().where({ estateId, action }).where('at', '>', until).orderBy('id').first();
    if (later) return (later.before as { method: BrixMethod }).method;
  }
  const { settings } = await Estate.query().findById(estateId).select('settings').throwIfNotFound();
  return estateSettings.parse(settings).alcoholMethod;
}

/** Chooses the way to potential alcohol for the whole estate; who changed it, and from what, stays on record. */
export async function chooseAlcoholMethod(access: Access, method: BrixMethod): Promise<void> {
  await Estate.transaction(async (trx) => {
    const estate = await Estate.query(trx).findById(access.estateId).forUpdate().throwIfNotFound();
    const settings = estateSettings.parse(estate.settings);
    if (settings.alcoholMethod === method) return;
    await Estate.query(trx).findById(access.estateId).patch({ settings: { ...settings, alcoholMethod: method } });
    await writeAudit(trx, access, { action, subjectType: 'estate', subjectId: access.estateId, subjectName: estate.name, before: { method: settings.alcoholMethod }, after: { method } });
  });
}
