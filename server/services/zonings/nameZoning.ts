import type { Access } from '../../access/access.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Zoning } from '../../models/Zoning.ts';

/** Names a saved run, so that it can be told from others. */
export async function nameZoning(access: Access, zoningId: string, name: string): Promise<void> {
  await Zoning.transaction(async (trx) => {
    const zoning = await Zoning.query(trx).findOne({ estateId: access.estateId, id: zoningId }).forUpdate().throwIfNotFound();
    await Zoning.query(trx).where({ estateId: access.estateId, id: zoningId }).patch({ name });
    await writeAudit(trx, access, { action: 'zoning.name', subjectType: 'zoning', subjectId: zoningId, subjectName: name, before: { name: zoning.name }, after: { name } });
  });
}
