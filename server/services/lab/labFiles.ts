import type { LabFileView } from '../../../shared/contracts/lab.ts';
import { isRemembered, type LabAnswers, type LabSurroundings, type RawLabFile, type UnderstoodLabFile } from '../../../shared/lab/file/labFile.ts';
import { understandLabFile } from '../../../shared/lab/file/understand.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import { shownFileName } from '../../importers/importProblem.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { LabFile } from '../../models/LabFile.ts';
import { LabMapping } from '../../models/LabMapping.ts';
import { Person } from '../../models/Person.ts';
import { storable } from '../../models/storable.ts';
import { StoredFile } from '../../models/StoredFile.ts';
import { fileStore } from '../../storage/fileStore.ts';
import { dropUploads, type Upload } from '../../storage/uploads.ts';
import { runCompute } from '../../workers/computePool.ts';
import { holdersOf } from '../bags/bagContext.ts';
import { checkedOf, correctedBy } from './fileCorrections.ts';
import { surroundings } from './surroundings.ts';
import { say } from '../../sentences/say.ts';

/** Takes a laboratory's file in: it is read and kept, and no result is stored yet. A file that cannot be read is not kept. */
export async function receiveLabFile(access: Access, uploads: readonly Upload[], now: Date): Promise<LabFileView> {
  try {
    const [upload] = uploads;
    if (!upload || uploads.length !== 1) throw new Unusable('oneFile', say('oneFile'));
    const raw = await runCompute<RawLabFile>('labFile', { path: upload.path, fileName: upload.name }, { lane: 'quick' });
    const first = understandLabFile(raw, await surroundings(access, now), {});
    const mapping = await knownMapping(access.estateId, first.signature);
    const { sha256, bytes } = await fileStore().keep(upload.path);
    const record = await LabFile.transaction(async (trx) => {
      const file = await StoredFile.query(trx).insert({ estateId: access.estateId, sha256, bytes, originalName: storable(upload.name).slice(0, 255), uploadedBy: access.personId });
      const row = await LabFile.query(trx).insertAndFetch({
        estateId: access.estateId,
        fileId: file.id,
        fileName: shownFileName(storable(upload.name)),
        labName: mapping?.labName ?? '',
        answers: mapping?.mapping.answers ?? {},
        sentBy: access.personId,
        sentAt: now,
      });
      await writeAudit(trx, access, { action: 'lab.receiveFile', subjectType: 'labFile', subjectId: row.id, subjectName: row.fileName, after: { sha256, bytes } });
      return row;
    });
    return await view(access, record, now);
  } finally {
    await dropUploads(uploads);
  }
}

/** The laboratory whose last file had the same columns. */
async function knownMapping(estateId: string, signature: string): Promise<LabMapping | null> {
  if (signature === '') return null;
  const mappings = await LabMapping.query().where({ estateId }).orderBy('updatedAt', 'desc');
  return mappings.find(({ mapping }) => mapping.signature === signature) ?? null;
}

export async function viewLabFile(access: Access, fileId: string, now: Date): Promise<LabFileView> {
  return view(access, await LabFile.query().findOne({ estateId: access.estateId, id: fileId }).throwIfNotFound(), now);
}

/** Files of the last weeks, newest first, without their contents. */
export async function listLabFiles(access: Access): Promise<LabFileView[]> {
  const rows = await LabFile.query().where({ estateId: access.estateId }).whereNot({ state: 'dismissed' }).orderBy('sentAt', 'desc').limit(40);
  const people = await Person.query().findByIds(rows.flatMap(({ sentBy }) => sentBy ?? [])).select('id', 'name');
  return rows.map((row) => ({ ...outside(row, people), words: [], questions: [], entries: [], rememberedFrom: null, changesChecked: 0 }));
}

/** Takes answers; each may be given again until the results are stored. An answer that was not offered is refused. */
export async function answerLabFile(access: Access, fileId: string, answers: LabAnswers, now: Date): Promise<LabFileView> {
  const record = await openFile(access, fileId);
  const understood = (await read(access, record, { answers: record.answers, now })).understood;
  for (const [key, value] of Object.entries(answers)) {
    const question = understood.questions.find((each) => each.key === key);
    if (!question) throw new Unusable('notAsked', say('notAsked', { key, file: record.fileName }));
    if (!question.choices.some((choice) => choice.value === value)) throw new Unusable('notOffered', say('notOffered', { value, key, choices: question.choices.map((choice) => choice.label ?? choice.value).join(', ') }));
  }
  await LabFile.query().where({ estateId: access.estateId, id: fileId }).patch({ answers: { ...record.answers, ...answers } });
  return viewLabFile(access, fileId, now);
}

export async function dismissLabFile(access: Access, fileId: string): Promise<void> {
  const record = await openFile(access, fileId);
  await LabFile.transaction(async (trx) => {
    await LabFile.query(trx).where({ estateId: access.estateId, id: record.id }).patch({ state: 'dismissed' });
    await writeAudit(trx, access, { action: 'lab.dismissFile', subjectType: 'labFile', subjectId: record.id, subjectName: record.fileName });
  });
}

export async function openFile(access: Access, fileId: string): Promise<LabFile> {
  const record = await LabFile.query().findOne({ estateId: access.estateId, id: fileId }).throwIfNotFound();
  if (record.state === 'stored') throw new Clash('stored', say('resultsStoredBefore', { file: record.fileName }));
  if (record.state === 'dismissed') throw new Clash('dismissed', say('filePutAside', { file: record.fileName }));
  return record;
}

/** Reads the original again with what is known today: bags that were sent meanwhile are found. */
export async function read(access: Access, record: LabFile, { answers, now }: { answers: LabAnswers; now: Date }): Promise<{ understood: UnderstoodLabFile; around: LabSurroundings }> {
  const file = await StoredFile.query().findOne({ estateId: access.estateId, id: record.fileId }).throwIfNotFound();
  const raw = await fileStore().withPath(file.sha256, (path) => runCompute<RawLabFile>('labFile', { path, fileName: record.fileName }, { lane: 'quick' }));
  const around = await surroundings(access, now);
  return { understood: understandLabFile(raw, around, answers), around };
}

async function view(access: Access, record: LabFile, now: Date): Promise<LabFileView> {
  const people = await Person.query().findByIds(record.sentBy === null ? [] : [record.sentBy]).select('id', 'name');
  if (record.state !== 'asks') return { ...outside(record, people), words: [], questions: [], entries: [], rememberedFrom: null, changesChecked: 0 };
  const { understood } = await read(access, record, { answers: record.answers, now });
  const { words, questions, entries } = understood;
  const changesChecked = record.answers.again === 'replace' ? checkedOf(await correctedBy(access.estateId, { entries, bags: await holdersOf(undefined, access.estateId, entries.map(({ code }) => code)) })) : 0;
  const remembered = record.labName !== '' && questions.some(({ key, answer }) => answer !== null && isRemembered(key));
  return { ...outside(record, people), words: [...words], questions: questions.map((question) => ({ ...question, choices: [...question.choices] })), entries: [...entries], rememberedFrom: remembered ? record.labName : null, changesChecked };
}

function outside(row: LabFile, people: readonly Person[]): Omit<LabFileView, 'words' | 'questions' | 'entries' | 'rememberedFrom' | 'changesChecked'> {
  return {
    id: row.id,
    fileName: row.fileName,
    labName: row.labName,
    state: row.state,
    sentAt: row.sentAt.toISOString(),
    sentBy: people.find(({ id }) => id === row.sentBy)?.name ?? null,
    storedAt: row.storedAt?.toISOString() ?? null,
    storedCount: row.storedCount,
  };
}
