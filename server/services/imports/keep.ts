import type { Readable } from 'node:stream';
import type { Access } from '../../access/access.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { FileImport } from '../../models/FileImport.ts';
import { StoredFile } from '../../models/StoredFile.ts';
import { fileStore } from '../../storage/fileStore.ts';
import { openImport } from './answer.ts';

/** Takes a line off the import desk. What was made of the file stays; a file of which nothing was made is not asked about again. */
export async function dismissImport(access: Access, importId: string, now: Date): Promise<void> {
  await FileImport.transaction(async (trx) => {
    const record = await FileImport.query(trx).findOne({ estateId: access.estateId, id: importId }).whereNull('retiredAt').forUpdate().throwIfNotFound();
    if (record.state === 'ready') await openImport(access, importId, trx);
    await FileImport.query(trx).where({ estateId: access.estateId, id: importId }).patch({ retiredAt: now });
    await writeAudit(trx, access, { action: 'import.dismiss', subjectType: 'import', subjectId: importId, subjectName: record.fileName });
  });
}

/** The original of a file, byte for byte. */
export async function openOriginal(access: Access, fileId: string): Promise<{ name: string; bytes: number; sha256: string; stream: Readable }> {
  const file = await StoredFile.query().findOne({ estateId: access.estateId, id: fileId }).throwIfNotFound();
  return { name: file.originalName, bytes: file.bytes, sha256: file.sha256, stream: await fileStore().read(file.sha256) };
}
