import { AnalysisError } from '../../../shared/analysis/analysisError.ts';
import type { ImportNote, ImportView } from '../../../shared/contracts/imports.ts';
import type { LonLat } from '../../../shared/geo/coordinates.ts';
import type { Access } from '../../access/access.ts';
import { Unusable } from '../../errors.ts';
import { ImportProblem, shownFileName } from '../../importers/importProblem.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { FileImport, type ImportMemory, type KeptPart } from '../../models/FileImport.ts';
import { storable } from '../../models/storable.ts';
import { StoredFile } from '../../models/StoredFile.ts';
import type { Described } from '../../placing/describeFile.ts';
import type { SourceFile } from '../../placing/placed.ts';
import { fileStore } from '../../storage/fileStore.ts';
import { dropUploads, type Upload } from '../../storage/uploads.ts';
import { runCompute } from '../../workers/computePool.ts';
import { withCompanions, type Accompanied } from './companions.ts';
import { viewsOf } from './view.ts';
import { blocksUnder, estatePlace, hasBlocks } from './whereabouts.ts';
import { say } from '../../sentences/say.ts';

const longestName = 255;

/**
 * Takes uploaded files in, one line each. A file that can be read is kept and its questions are asked; one that cannot is
 * not kept, only its name and the reason. Refuses the request as a whole when no file of it can be used.
 */
export async function receiveFiles(access: Access, uploads: readonly Upload[]): Promise<ImportView[]> {
  const packed: Upload[] = [];
  try {
    if (uploads.length === 0) throw new Unusable('noFiles', say('noFiles'));
    const estateLonLat = await estatePlace(access.estateId);
    const records: FileImport[] = [];
    const groups = await withCompanions(uploads);
    packed.push(...groups.map(({ upload }) => upload));
    for (const group of groups) records.push(await receiveOne(access, { ...group, estateLonLat }));
    const views = await viewsOf(access, await FileImport.query().where({ estateId: access.estateId }).findByIds(records.map((record) => record.id)).orderBy('createdAt'));
    if (views.every((view) => view.state === 'refused')) {
      throw new Unusable(views[0]!.problem?.code ?? 'refused', views.map((view) => view.problem?.text ?? '').join(' '), { items: views });
    }
    return views;
  } finally {
    await dropUploads([...uploads, ...packed]);
  }
}

interface Received extends Accompanied {
  estateLonLat: LonLat | null;
}

async function receiveOne(access: Access, received: Received): Promise<FileImport> {
  const { upload, companions } = received;
  try {
    const source: SourceFile = { path: upload.path, fileName: upload.name, estateLonLat: received.estateLonLat, answers: {}, companions };
    const described = await runCompute<Described>('describeFile', source, { lane: 'quick' });
    await requireMeeting(access, upload.name, described);
    return await keep(access, received, described);
  } catch (error) {
    const problem = problemNote(error);
    if (problem === null) throw error;
    return refuse(access, upload.name, problem);
  }
}

/** A picture that lies over no block, and has no other place it could be meant for, is of no use here. Before there are blocks it waits for them. */
async function requireMeeting(access: Access, fileName: string, described: Described): Promise<void> {
  const { file, questions } = described;
  const mayMove = questions.some((question) => question.code === 'reference' || (question.code === 'placement' && question.choices.length > 1));
  if (file.kind !== 'raster' || file.outlineLonLat === null || mayMove) return;
  if (await hasBlocks(access.estateId)) await requireOverBlocks(access.estateId, fileName, file.outlineLonLat);
}

/** Throws ImportProblem with the distance when an outline touches no block of the estate. */
export async function requireOverBlocks(estateId: string, fileName: string, outline: readonly (readonly [number, number])[]): Promise<void> {
  const { covers, nearestKm } = await blocksUnder(estateId, outline);
  if (covers.length > 0) return;
  if (nearestKm === null) throw new ImportProblem({ code: 'not-overlapping', fact: 'This estate has no blocks yet that it could lie on.', remedy: 'Make a block first, then confirm here.', params: { why: 'no-blocks-yet' }, file: fileName });
  const shown = nearestKm < 10 ? Math.max(0.1, nearestKm).toFixed(1) : String(Math.round(nearestKm));
  throw new ImportProblem({
    code: 'not-overlapping',
    fact: `It does not cover any of the blocks: the nearest is ${shown} km away.`,
    remedy: 'Check that it is the right file, and that its reference system is the one it names.',
    params: { why: 'far', km: Number(shown) },
    file: fileName,
  });
}

async function keep(access: Access, { upload, companions, parts }: Received, described: Described): Promise<FileImport> {
  const { sha256, bytes } = await fileStore().keep(upload.path);
  const { maskPath, ...texts } = companions;
  const kept: (KeptPart & { path: string })[] = [];
  for (const part of parts) kept.push({ name: shownFileName(part.name), path: part.path, ...(await fileStore().keep(part.path)) });
  const maskSha256 = kept.find(({ path }) => path === maskPath)?.sha256 ?? null;
  const understood: ImportMemory = { file: described.file, asked: described.questions, companions: { ...texts, maskSha256, parts: kept.map(({ path: _, ...part }) => part) }, outlines: [] };
  return FileImport.transaction(async (trx) => {
    const file = await StoredFile.query(trx).insert({ estateId: access.estateId, sha256, bytes, originalName: storable(upload.name).slice(0, longestName), uploadedBy: access.personId });
    for (const { name, ...part } of understood.companions.parts!) await StoredFile.query(trx).insert({ estateId: access.estateId, ...part, originalName: storable(name), uploadedBy: access.personId });
    const record = await FileImport.query(trx).insert(
      storable({ estateId: access.estateId, fileId: file.id, fileName: shownFileName(upload.name), format: described.format, state: 'asks' as const, understood, answers: {}, warnings: described.notes, problem: null, createdBy: access.personId }),
    );
    await writeAudit(trx, access, {
      action: 'import.receive',
      subjectType: 'import',
      subjectId: record.id,
      subjectName: record.fileName,
      after: { sha256, bytes, format: described.format, ...(kept.length === 0 ? {} : { parts: understood.companions.parts }) },
    });
    return record;
  });
}

async function refuse(access: Access, fileName: string, problem: ImportNote): Promise<FileImport> {
  return FileImport.transaction(async (trx) => {
    const understood: ImportMemory = { file: null, asked: [], companions: { worldFileText: null, projectionFileText: null }, outlines: [] };
    const refused = { estateId: access.estateId, fileId: null, fileName: shownFileName(fileName), format: '', state: 'refused' as const, understood, answers: {}, warnings: [], problem, createdBy: access.personId };
    const record = await FileImport.query(trx).insert({ ...storable(refused), finishedAt: new Date() });
    await writeAudit(trx, access, { action: 'import.refuse', subjectType: 'import', subjectId: record.id, subjectName: record.fileName, reason: storable(problem.text) });
    return record;
  });
}

/** Why a file cannot be used, for people; null for a fault of ours. */
export function problemNote(error: unknown): ImportNote | null {
  if (error instanceof ImportProblem) return { code: error.code, text: error.message, params: { ...error.params } };
  if (error instanceof AnalysisError) return { code: error.code, text: error.message, params: {} };
  return null;
}
