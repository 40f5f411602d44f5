import type { Transaction } from 'objection';
import type { ImportAnswers, ImportQuestion, ImportView } from '../../../shared/contracts/imports.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import { enqueueJob } from '../../jobs/queue.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { FileImport, type ImportMemory } from '../../models/FileImport.ts';
import { Job } from '../../models/Job.ts';
import { storable } from '../../models/storable.ts';
import type { Described } from '../../placing/describeFile.ts';
import { runCompute } from '../../workers/computePool.ts';
import { readOutlines } from './outlines.ts';
import { requireOverBlocks } from './receive.ts';
import { withSource } from './source.ts';
import { findRows, takeRows } from './takeRows.ts';
import { questionsOf, viewImport } from './view.ts';
import { say } from '../../sentences/say.ts';

/** Answers that change how the file itself is read. The others only say what to do with it. */
const readerAnswers = ['reference', 'projectionText', 'placement', 'noData', 'maskBand', 'sourceLayer', 'xColumn', 'yColumn', 'swapAxes', 'decimalMark'] as const satisfies (keyof ImportAnswers)[];

/**
 * Takes answers about a file. When nothing is left to ask, outlines are offered as blocks or the layer is placed in the
 * background; rows are laid at once. An answer that cannot be used changes nothing.
 */
export async function answerImport(access: Access, importId: string, answers: ImportAnswers): Promise<ImportView> {
  const record = await openImport(access, importId);
  const merged = { ...record.answers, ...answers };
  const again = readerAnswers.some((code) => answers[code] !== undefined && JSON.stringify(answers[code]) !== JSON.stringify(record.answers[code]));
  const read = again ? await readAgain(record, merged) : { understood: record.understood, notes: record.warnings };
  const questions = questionsOf({ fileName: record.fileName, answers: merged, understood: read.understood });
  requireOffered(answers, questions);
  const isComplete = questions.every((question) => question.answered);
  const next = isComplete ? await completed(access, record, { answers: merged, understood: read.understood }) : { state: 'asks' as const, understood: read.understood };
  const rows = isComplete && merged.purpose === 'rows' ? await withSource(record, merged, (source) => findRows(access, source)) : null;
  await FileImport.transaction(async (trx) => {
    await openImport(access, importId, trx);
    const laid = rows === null ? null : { state: 'done' as const, warnings: [...read.notes, ...(await takeRows(trx, access, rows, new Date()))], finishedAt: new Date() };
    await FileImport.query(trx).where({ estateId: access.estateId, id: importId }).patch(storable({ answers: merged, state: next.state, understood: next.understood, warnings: read.notes, problem: null, ...laid }));
    await writeAudit(trx, access, { action: 'import.answer', subjectType: 'import', subjectId: importId, subjectName: record.fileName, before: record.answers, after: merged });
    if (isComplete && rows === null && merged.purpose !== 'boundary') await enqueueJob(trx, access, { kind: 'placeLayer', subjectType: 'import', subjectId: importId });
  });
  return viewImport(access, importId);
}

/** An import that still takes answers: it asks, offers outlines, or was refused after an answer that can be changed. */
export async function openImport(access: Access, importId: string, trx?: Transaction): Promise<FileImport> {
  const query = FileImport.query(trx).findOne({ estateId: access.estateId, id: importId }).whereNull('retiredAt').throwIfNotFound();
  const record = await (trx ? query.forUpdate() : query);
  if (record.fileId === null) throw new Clash('importRefused', say('importRefused', { file: record.fileName }));
  if (record.state === 'done') throw new Clash('importDone', say('importDoneAlready', { file: record.fileName }));
  if (record.state === 'ready' && record.answers.purpose !== 'boundary' && (await isBeingPlaced(record, trx))) throw new Clash('importPlacing', say('importPlacing', { file: record.fileName }));
  return record;
}

async function isBeingPlaced(record: FileImport, trx?: Transaction): Promise<boolean> {
  const open = await Job.query(trx).where({ estateId: record.estateId, subjectType: 'import', subjectId: record.id }).whereIn('state', ['queued', 'running']).resultSize();
  return open > 0;
}

async function readAgain(record: FileImport, answers: ImportAnswers): Promise<{ understood: ImportMemory; notes: FileImport['warnings'] }> {
  const described = await withSource(record, answers, (source) => runCompute<Described>('describeFile', source, { lane: 'quick' }));
  const settled = record.understood.asked
    .filter((question) => described.questions.every((still) => still.code !== question.code))
    .map((question): ImportQuestion => ({ ...question, answered: true, answer: (answers[question.code as keyof ImportAnswers] ?? null) as ImportQuestion['answer'] }));
  return { understood: { ...record.understood, file: described.file, asked: [...settled, ...described.questions] }, notes: described.notes };
}

/** An answer must be one of those that were offered; free answers (a day, a unit, a name) are checked by the contract. */
function requireOffered(answers: ImportAnswers, questions: readonly ImportQuestion[]): void {
  for (const code of Object.keys(answers)) {
    const question = questions.find((each) => each.code === code);
    if (!question || question.answered) continue;
    if (question.reason !== null) throw new Unusable('answerNotUsable', say('answerNotUsable', { code, reason: question.reason }));
    throw new Unusable('answerNotOffered', say('answerNotOffered', { answer: String(answers[code as keyof ImportAnswers]), code, choices: question.choices.map((choice) => String(choice.value)).join(', ') || say('noChoices') }));
  }
}

async function completed(access: Access, record: FileImport, { answers, understood }: { answers: ImportAnswers; understood: ImportMemory }): Promise<{ state: 'ready'; understood: ImportMemory }> {
  if (answers.purpose === 'boundary') {
    const outlines = await withSource(record, answers, (source) => readOutlines(source));
    return { state: 'ready', understood: { ...understood, outlines } };
  }
  if (understood.file?.outlineLonLat) await requireOverBlocks(access.estateId, record.fileName, understood.file.outlineLonLat);
  return { state: 'ready', understood: { ...understood, outlines: [] } };
}
