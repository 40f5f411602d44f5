import type { Readable } from 'node:stream';
import type { EarlierFileView } from '../../../shared/contracts/earlier.ts';
import type { Access } from '../../access/access.ts';
import { Clash } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { EarlierFile } from '../../models/EarlierFile.ts';
import { Reading } from '../../models/Reading.ts';
import { StoredFile } from '../../models/StoredFile.ts';
import { fileStore } from '../../storage/fileStore.ts';
import { viewEarlierFile } from './files.ts';
import { say } from '../../sentences/say.ts';

/** Leaves all readings of a table out of the figures, with a reason; none is deleted, and those left out before keep their own reason. */
export async function takeBackEarlierFile(access: Access, fileId: string, reason: string, now: Date): Promise<EarlierFileView> {
  const { estateId, personId } = access;
  await EarlierFile.transaction(async (trx) => {
    const record = await EarlierFile.query(trx).findOne({ estateId, id: fileId }).forUpdate().throwIfNotFound();
    if (record.state !== 'stored') throw new Clash('notStored', say('notStored', { file: record.fileName }));
    const count = await Reading.query(trx).where({ estateId, earlierFileId: fileId }).whereNull('excludedReason').patch({ excludedReason: reason, excludedBy: personId });
    await EarlierFile.query(trx).where({ estateId, id: fileId }).patch({ state: 'takenBack', takenBackBy: personId, takenBackAt: now, takenBackReason: reason });
    await writeAudit(trx, access, { action: 'earlier.takeBack', subjectType: 'earlierFile', subjectId: fileId, subjectName: record.fileName, after: { readings: count }, reason });
  });
  return viewEarlierFile(access, fileId, now);
}

/** The table itself, byte for byte. */
export async function openEarlierOriginal({ estateId }: Access, fileId: string): Promise<{ name: string; bytes: number; stream: Readable }> {
  const record = await EarlierFile.query().findOne({ estateId, id: fileId }).throwIfNotFound();
  const file = await StoredFile.query().findOne({ estateId, id: record.fileId }).throwIfNotFound();
  return { name: file.originalName, bytes: file.bytes, stream: await fileStore().read(file.sha256) };
}
