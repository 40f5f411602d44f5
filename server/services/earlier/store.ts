import { createHash } from 'node:crypto';
import type { Transaction } from 'objection';
import type { z } from 'zod';
import type { EarlierFileView, earlierStore } from '../../../shared/contracts/earlier.ts';
import type { EarlierEntry } from '../../../shared/earlier/earlierTable.ts';
import { summariseEarlier } from '../../../shared/earlier/summary.ts';
import { startingPhases } from '../../../shared/season/phases.ts';
import { missingSeasons } from '../../../shared/season/seasonAround.ts';
import { instantAt } from '../../../shared/season/wallClock.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { EarlierFile } from '../../models/EarlierFile.ts';
import { Estate } from '../../models/Estate.ts';
import { Reading } from '../../models/Reading.ts';
import { Scenario } from '../../models/Scenario.ts';
import { Season } from '../../models/Season.ts';
import { StoredFile } from '../../models/StoredFile.ts';
import { openEarlierFile, viewEarlierFile } from './files.ts';
import { readStoredTable, withoutKnown, type ReadTable } from './readTable.ts';
import { say } from '../../sentences/say.ts';

/** PostgreSQL takes 65 535 values in one statement. */
const rowsAtOnce = 500;
const mostReadings = 60_000;

/**
 * Stores the readings of a table, all or none, with the seasons that their days need. Refused while a question is open,
 * and while lines that cannot be used are not named as left out. A table that is stored stays as it is: confirming it
 * again answers the same. Ids follow from the file, the line and the measure.
 */
export async function storeEarlierFile(access: Access, fileId: string, { leaveOut }: z.infer<typeof earlierStore>, now: Date): Promise<EarlierFileView> {
  const { estateId } = access;
  const before = await EarlierFile.query().findOne({ estateId, id: fileId }).throwIfNotFound();
  if (before.state === 'stored') return viewEarlierFile(access, fileId, now);
  const record = await openEarlierFile(access, fileId);
  const table = await readStoredTable(estateId, record, { answers: record.answers, now });
  refuseUnready(record, table, leaveOut);
  await EarlierFile.transaction(async (trx) => {
    await trx.raw('select pg_advisory_xact_lock(hashtextextended(?, 0))', [`readings ${estateId}`]);
    const locked = await EarlierFile.query(trx).findOne({ estateId, id: fileId }).forUpdate().throwIfNotFound();
    if (locked.state !== 'asks') return;
    const entries = await withoutKnown(estateId, table.understood.entries, { timeZone: table.timeZone, trx });
    if (entries.length === 0) throw new Unusable('allKnown', say('allKnown', { file: record.fileName }));
    const seasons = await Season.query(trx).where({ estateId });
    const made = await makeSeasons(trx, access, { days: entries.map(({ day }) => day), seasons, now });
    const rows = await rowsOf(trx, access, entries, { record, table, seasons: [...seasons, ...made], now });
    for (let from = 0; from < rows.length; from += rowsAtOnce) await Reading.query(trx).insert(rows.slice(from, from + rowsAtOnce));
    const summary = summariseEarlier(table.understood, entries, { blocks: table.around.blocks, seasons, newSeasons: made, known: table.understood.entries.length - entries.length });
    await EarlierFile.query(trx).where({ estateId, id: fileId }).patch({ state: 'stored', summary, storedBy: access.personId, storedAt: now });
    await writeAudit(trx, access, {
      action: 'earlier.store',
      subjectType: 'earlierFile',
      subjectId: fileId,
      subjectName: record.fileName,
      after: { readings: entries.length, leftOut: leaveOut, seasons: made.map(({ name }) => name), answers: record.answers },
    });
  });
  return viewEarlierFile(access, fileId, now);
}

function refuseUnready({ fileName }: EarlierFile, { understood }: ReadTable, leaveOut: number): void {
  const open = understood.questions.filter(({ answer }) => answer === null);
  if (open.length > 0) throw new Clash('questionsOpen', say('questionsOpen', { n: open.length, file: fileName }));
  const { refused, entries } = understood;
  if (entries.length === 0) throw new Unusable('noReadings', refused[0] ? say('noReadingsSince', { file: fileName, line: refused[0].line }) : say('noReadings', { file: fileName }));
  if (entries.length > mostReadings) throw new Unusable('tooManyReadings', say('tooManyReadings', { file: fileName, count: entries.length, most: mostReadings }));
  if (leaveOut !== refused.length) throw new Clash('linesRefused', say('linesRefused', { n: refused.length, file: fileName, line: refused[0]?.line ?? 0 }), { refused: refused.slice(0, 20) });
}

/** Seasons that the days of the table need and the estate has not; one that is over is made closed. */
async function makeSeasons(trx: Transaction, access: Access, { days, seasons, now }: { days: readonly string[]; seasons: readonly Season[]; now: Date }): Promise<Season[]> {
  const { estateId, personId } = access;
  const { seasonStartMonth } = await Estate.query(trx).findById(estateId).throwIfNotFound();
  const made: Season[] = [];
  for (const span of missingSeasons(days, seasons, seasonStartMonth)) {
    const season = await Season.query(trx).insertAndFetch({ estateId, ...span, phases: startingPhases(span.startsOn), closedAt: span.endsOn < now.toISOString().slice(0, 10) ? now : null });
    await Scenario.query(trx).insert({ estateId, seasonId: season.id, name: season.name, isLive: true, createdBy: personId });
    await writeAudit(trx, access, { action: 'earlier.season', subjectType: 'season', subjectId: season.id, subjectName: season.name, after: span });
    made.push(season);
  }
  return made;
}

async function rowsOf(trx: Transaction, access: Access, entries: readonly EarlierEntry[], { record, table, seasons, now }: { record: EarlierFile; table: ReadTable; seasons: readonly Season[]; now: Date }): Promise<Partial<Reading>[]> {
  const { estateId, personId } = access;
  const { sha256 } = await StoredFile.query(trx).findOne({ estateId, id: record.fileId }).throwIfNotFound();
  // What was taken back stays as it is; the same file sent once more makes readings of its own.
  const takenBack = await EarlierFile.query(trx).where({ estateId, state: 'takenBack' }).whereIn('fileId', StoredFile.query(trx).where({ estateId, sha256 }).select('id')).resultSize();
  const unitOf = new Map(table.around.measures.map(({ code, unit }) => [code, unit]));
  const noon = new Map([...new Set(entries.map(({ day }) => day))].map((day) => [day, instantAt(table.timeZone, `${day}T12:00`)]));
  return entries.map(({ line, blockId, rowId, ordinal, rowLabel, vineNumber, measure, value, below, typed, unitTyped, day, odd, isRepeat }) => ({
    id: idOf(estateId, sha256, takenBack, line, measure), estateId, seasonId: seasons.find(({ startsOn, endsOn }) => startsOn <= day && day <= endsOn)!.id,
    blockId, rowId, ordinal, measureCode: measure, value, unit: unitOf.get(measure)!, valueTyped: typed, unitTyped, takenAt: noon.get(day)!, receivedAt: now, personId,
    source: 'import' as const, state: 'checked' as const, earlierFileId: record.id, seenAs: { row: rowLabel, vine: vineNumber },
    flags: [...(below ? ['belowDetection'] : []), ...(odd ? ['odd'] : []), ...(isRepeat ? ['repeat'] : [])],
  }));
}

/** A version 8 identifier: our own digits, the same for the same line and measure of the same file. */
function idOf(...parts: (string | number)[]): string {
  const hex = createHash('sha256').update(parts.join('|')).digest('hex');
  return [hex.slice(0, 8), hex.slice(8, 12), `8${hex.slice(13, 16)}`, `${'89ab'[Number.parseInt(hex[16]!, 16) % 4]}${hex.slice(17, 20)}`, hex.slice(20, 32)].join('-');
}
