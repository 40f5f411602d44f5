import { randomUUID } from 'node:crypto';
import type { z } from 'zod';
import type { LabFileView, labFileStore } from '../../../shared/contracts/lab.ts';
import { isRemembered, type LabEntry } from '../../../shared/lab/file/labFile.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { LabFile } from '../../models/LabFile.ts';
import { LabMapping } from '../../models/LabMapping.ts';
import { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Reading } from '../../models/Reading.ts';
import { holdersOf } from '../bags/bagContext.ts';
import { seasonFinder } from '../bags/labels.ts';
import { checkedOf, correctedBy } from './fileCorrections.ts';
import { openFile, read, viewLabFile } from './labFiles.ts';
import { say } from '../../sentences/say.ts';

/** PostgreSQL takes 65 535 values in one statement. */
const rowsAtOnce = 500;

/**
 * Stores the results of a file as provisional, all or none, and remembers how this laboratory's files are read. Refused
 * while a question is open, and without a reason where it corrects checked figures; a second press finds the file stored and changes nothing.
 */
export async function storeLabFile(access: Access, fileId: string, input: z.infer<typeof labFileStore>, now: Date): Promise<LabFileView> {
  const { estateId, personId } = access;
  const record = await openFile(access, fileId);
  const { understood } = await read(access, record, { answers: record.answers, now });
  const open = understood.questions.filter(({ answer }) => answer === null);
  if (open.length > 0) throw new Clash('questionsOpen', say('questionsOpen', { n: open.length, file: record.fileName }));
  if (understood.entries.length === 0) throw new Unusable('noResults', say('noResults', { file: record.fileName }));
  await LabFile.transaction(async (trx) => {
    const locked = await LabFile.query(trx).findOne({ estateId, id: fileId }).forUpdate().throwIfNotFound();
    if (locked.state !== 'asks') throw new Clash('stored', say('resultsStored', { file: record.fileName }));
    const rows = await rowsOf(access, understood.entries, { trx, record, input, now, replace: record.answers.again === 'replace' });
    for (let from = 0; from < rows.length; from += rowsAtOnce) await Reading.query(trx).insert(rows.slice(from, from + rowsAtOnce));
    const answers = Object.fromEntries(understood.questions.flatMap(({ key, answer }) => (answer !== null && isRemembered(key) ? [[key, answer]] : [])));
    await LabMapping.query(trx).insert({ estateId, labName: input.labName, mapping: { signature: understood.signature, answers }, updatedAt: now }).onConflict(['estateId', 'labName']).merge(['mapping', 'updatedAt']);
    await LabFile.query(trx).where({ estateId, id: fileId }).patch({ state: 'stored', labName: input.labName, storedBy: personId, storedAt: now, storedCount: understood.entries.length });
    await writeAudit(trx, access, {
      action: 'lab.storeFile',
      subjectType: 'labFile',
      subjectId: fileId,
      subjectName: record.fileName,
      after: { labName: input.labName, results: understood.entries.length, answers: record.answers },
      reason: input.reason === '' ? null : input.reason,
    });
  });
  return viewLabFile(access, fileId, now);
}

interface Storing {
  trx: NonNullable<Parameters<typeof holdersOf>[0]>;
  record: LabFile;
  input: z.infer<typeof labFileStore>;
  now: Date;
  replace: boolean;
}

async function rowsOf(access: Access, entries: readonly LabEntry[], { trx, record, input, now, replace }: Storing): Promise<Partial<Reading>[]> {
  const { estateId, personId } = access;
  const bags = await holdersOf(trx, estateId, entries.map(({ code }) => code));
  const seasonOf = await seasonFinder(trx, estateId);
  const measures = await MeasureRecord.query(trx).where({ estateId });
  const corrected = replace ? await correctedBy(estateId, { entries, bags }, trx) : new Map<LabEntry, Reading>();
  const checked = checkedOf(corrected);
  if (checked > 0 && input.reason.length < 3) throw new Unusable('needsReason', say('checkedNeedReason', { n: checked, file: record.fileName }));
  return entries.map((entry) => {
    const bag = bags.find(({ code }) => code === entry.code);
    if (!bag) throw new Clash('bagGone', say('bagGone', { code: entry.code }));
    const former = corrected.get(entry);
    return {
      id: randomUUID(), estateId, seasonId: seasonOf(bag), blockId: bag.blockId, roundId: bag.roundId, bagId: bag.id,
      measureCode: entry.measure, value: entry.value, unit: measures.find(({ code }) => code === entry.measure)!.unit, valueTyped: entry.typed, unitTyped: entry.unitTyped,
      samples: Math.max(1, bag.vines.length), takenAt: bag.closedAt ?? bag.receivedAt ?? now, receivedAt: now, personId, source: 'lab' as const, state: 'provisional' as const, stateBy: personId, stateAt: now,
      supersedes: former?.id ?? null, note: former ? input.reason : '', instrument: input.instrument, method: input.method, analysedOn: entry.analysedOn, labFileId: record.id,
      flags: [...(entry.below ? ['belowDetection'] : []), ...(entry.odd ? ['odd'] : []), ...(bag.facts.wet === true ? ['wetFruit'] : []), ...(entry.corrected ? ['temperature'] : [])],
    };
  });
}
