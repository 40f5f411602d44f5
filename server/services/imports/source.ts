import type { ImportAnswers } from '../../../shared/contracts/imports.ts';
import type { FileImport } from '../../models/FileImport.ts';
import { StoredFile } from '../../models/StoredFile.ts';
import type { SourceFile } from '../../placing/placed.ts';
import { fileStore } from '../../storage/fileStore.ts';
import { estatePlace } from './whereabouts.ts';

/** Runs work on the kept original of an import, with everything that was said about it. */
export async function withSource<Result>(record: FileImport, answers: ImportAnswers, work: (source: SourceFile) => Promise<Result>): Promise<Result> {
  const file = await StoredFile.query().findOne({ estateId: record.estateId, id: record.fileId }).throwIfNotFound();
  const estateLonLat = await estatePlace(record.estateId);
  const { maskSha256 = null, parts: _, ...texts } = record.understood.companions;
  const read = (maskPath: string | null) => fileStore().withPath(file.sha256, (path) => work({ path, fileName: record.fileName, estateLonLat, answers, companions: { ...texts, maskPath } }));
  return maskSha256 === null ? read(null) : fileStore().withPath(maskSha256, read);
}
