import type { EarlierFileView } from '../../../shared/contracts/earlier.ts';
import { isKeptForNext } from '../../../shared/earlier/earlierTable.ts';
import { summariseEarlier } from '../../../shared/earlier/summary.ts';
import type { LabAnswers } from '../../../shared/lab/file/labFile.ts';
import { missingSeasons } from '../../../shared/season/seasonAround.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import { shownFileName } from '../../importers/importProblem.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { EarlierFile } from '../../models/EarlierFile.ts';
import { Estate } from '../../models/Estate.ts';
import { Person } from '../../models/Person.ts';
import { Season } from '../../models/Season.ts';
import { storable } from '../../models/storable.ts';
import { StoredFile } from '../../models/StoredFile.ts';
import { fileStore } from '../../storage/fileStore.ts';
import { dropUploads, type Upload } from '../../storage/uploads.ts';
import { readAgainst, readRaw, readStoredTable, withoutKnown, type ReadTable } from './readTable.ts';
import { say } from '../../sentences/say.ts';

const shownRefused = 60;
const shownFiles = 60;

/** Takes a table in: it is read and kept, and no reading is stored yet. A file that is here already is shown as it stands. */
export async function receiveEarlierFile(access: Access, uploads: readonly Upload[], now: Date): Promise<EarlierFileView> {
  const { estateId, personId } = access;
  try {
    const [upload] = uploads;
    if (!upload || uploads.length !== 1) throw new Unusable('oneFile', say('oneFile'));
    const raw = await readRaw(upload.path, upload.name);
    const { signature } = (await readAgainst(estateId, raw, { answers: {}, now })).understood;
    const alike = signature === '' ? undefined : await EarlierFile.query().where({ estateId, signature, state: 'stored' }).orderBy('storedAt', 'desc').first();
    const answers = Object.fromEntries(Object.entries(alike?.answers ?? {}).filter(([key]) => isKeptForNext(key)));
    const { sha256, bytes } = await fileStore().keep(upload.path);
    const record = await EarlierFile.transaction(async (trx) => {
      const here = await EarlierFile.query(trx).where({ estateId }).whereIn('state', ['asks', 'stored']).whereIn('fileId', StoredFile.query(trx).where({ estateId, sha256 }).select('id')).first();
      if (here) return here;
      const file = await StoredFile.query(trx).insert({ estateId, sha256, bytes, originalName: storable(upload.name).slice(0, 255), uploadedBy: personId });
      const row = await EarlierFile.query(trx).insertAndFetch({ estateId, fileId: file.id, fileName: shownFileName(storable(upload.name)), answers, remembered: Object.keys(answers).length > 0, signature, sentBy: personId, sentAt: now });
      await writeAudit(trx, access, { action: 'earlier.receive', subjectType: 'earlierFile', subjectId: row.id, subjectName: row.fileName, after: { sha256, bytes } });
      return row;
    });
    return await viewOf(access, record, now);
  } finally {
    await dropUploads(uploads);
  }
}

export async function viewEarlierFile(access: Access, fileId: string, now: Date): Promise<EarlierFileView> {
  return viewOf(access, await EarlierFile.query().findOne({ estateId: access.estateId, id: fileId }).throwIfNotFound(), now);
}

/** Tables of the estate, newest first, without what an open one asks. */
export async function listEarlierFiles(access: Access): Promise<EarlierFileView[]> {
  const rows = await EarlierFile.query().where({ estateId: access.estateId }).whereNot({ state: 'dismissed' }).orderBy('sentAt', 'desc').limit(shownFiles);
  const people = await namesOf(rows);
  return rows.map((row) => outside(row, people));
}

/** Takes answers; each may be given again until the readings are stored. An answer that was not offered is refused. */
export async function answerEarlierFile(access: Access, fileId: string, answers: LabAnswers, now: Date): Promise<EarlierFileView> {
  const record = await openEarlierFile(access, fileId);
  const { understood } = await readStoredTable(access.estateId, record, { answers: { ...record.answers, ...answers }, now });
  for (const [key, value] of Object.entries(answers)) {
    const question = understood.questions.find((each) => each.key === key);
    if (!question) throw new Unusable('notAsked', say('notAsked', { key, file: record.fileName }));
    if (question.answer !== value)
      throw new Unusable(
        'notOffered',
        question.choices.length === 0
          ? say('notADay', { value, file: record.fileName })
          : say('notOffered', { value, key, choices: question.choices.map((choice) => choice.label ?? choice.value).join(', ') }),
      );
  }
  await EarlierFile.query().where({ estateId: access.estateId, id: fileId }).patch({ answers: { ...record.answers, ...answers } });
  return viewEarlierFile(access, fileId, now);
}

export async function dismissEarlierFile(access: Access, fileId: string): Promise<void> {
  const record = await openEarlierFile(access, fileId);
  await EarlierFile.transaction(async (trx) => {
    await EarlierFile.query(trx).where({ estateId: access.estateId, id: record.id }).patch({ state: 'dismissed' });
    await writeAudit(trx, access, { action: 'earlier.dismiss', subjectType: 'earlierFile', subjectId: record.id, subjectName: record.fileName });
  });
}

/** A table of which nothing is stored yet. */
export async function openEarlierFile(access: Access, fileId: string): Promise<EarlierFile> {
  const record = await EarlierFile.query().findOne({ estateId: access.estateId, id: fileId }).throwIfNotFound();
  if (record.state === 'stored') throw new Clash('stored', say('readingsStored', { file: record.fileName }));
  if (record.state !== 'asks') throw new Clash(record.state, say(record.state === 'dismissed' ? 'filePutAside' : 'fileTakenBack', { file: record.fileName }));
  return record;
}

/** What would be stored of a table as it is understood now. */
export async function summaryOf(estateId: string, { understood, around, timeZone }: ReadTable) {
  const [fresh, seasons, estate] = await Promise.all([withoutKnown(estateId, understood.entries, { timeZone }), Season.query().where({ estateId }), Estate.query().findById(estateId).throwIfNotFound()]);
  const newSeasons = missingSeasons(fresh.map(({ day }) => day), seasons, estate.seasonStartMonth);
  return summariseEarlier(understood, fresh, { blocks: around.blocks, seasons, newSeasons, known: understood.entries.length - fresh.length });
}

async function viewOf(access: Access, record: EarlierFile, now: Date): Promise<EarlierFileView> {
  const view = outside(record, await namesOf([record]));
  if (record.state !== 'asks') return view;
  const table = await readStoredTable(access.estateId, record, { answers: record.answers, now });
  const { words, questions, refused } = table.understood;
  return {
    ...view, words: [...words], questions: questions.map((question) => ({ ...question, choices: [...question.choices] })),
    refused: refused.slice(0, shownRefused), refusedCount: refused.length, summary: await summaryOf(access.estateId, table),
    isRemembered: record.remembered,
  };
}

async function namesOf(rows: readonly EarlierFile[]): Promise<Person[]> {
  return Person.query().findByIds([...new Set(rows.flatMap(({ sentBy, takenBackBy }) => [sentBy, takenBackBy]).filter((id) => id !== null))]).select('id', 'name');
}

function outside({ id, fileName, state, sentAt, sentBy, storedAt, takenBackAt, takenBackBy, takenBackReason, summary }: EarlierFile, people: readonly Person[]): EarlierFileView {
  const nameOf = (personId: string | null) => people.find((person) => person.id === personId)?.name ?? null;
  return {
    id, fileName, state, sentAt: sentAt.toISOString(), sentBy: nameOf(sentBy), storedAt: storedAt?.toISOString() ?? null,
    takenBackAt: takenBackAt?.toISOString() ?? null, takenBackBy: nameOf(takenBackBy), takenBackReason,
    words: [], questions: [], refused: [], refusedCount: 0, summary, isRemembered: false,
  };
}
