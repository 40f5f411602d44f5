import type { Readable } from 'node:stream';
import type { Access } from '../../access/access.ts';
import { LabFile } from '../../models/LabFile.ts';
import { StoredFile } from '../../models/StoredFile.ts';
import { fileStore } from '../../storage/fileStore.ts';

/** The laboratory's own file, byte for byte. */
export async function openLabOriginal({ estateId }: Access, fileId: string): Promise<{ name: string; bytes: number; stream: Readable }> {
  const record = await LabFile.query().findOne({ estateId, id: fileId }).throwIfNotFound();
  const file = await StoredFile.query().findOne({ estateId, id: record.fileId }).throwIfNotFound();
  return { name: file.originalName, bytes: file.bytes, stream: await fileStore().read(file.sha256) };
}
