import type { TransactionOrKnex } from 'objection';
import type { EarlierBlock, EarlierEntry, EarlierSurroundings, UnderstoodEarlier } from '../../../shared/earlier/earlierTable.ts';
import { readingKey } from '../../../shared/earlier/repeats.ts';
import { understandEarlier } from '../../../shared/earlier/understand.ts';
import type { LabAnswers, RawLabFile } from '../../../shared/lab/file/labFile.ts';
import { dayIn } from '../../../shared/season/dayIn.ts';
import { loadBlockVines } from '../../ground/blockVines.ts';
import { Block } from '../../models/Block.ts';
import type { EarlierFile } from '../../models/EarlierFile.ts';
import { Estate } from '../../models/Estate.ts';
import { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Reading } from '../../models/Reading.ts';
import { StoredFile } from '../../models/StoredFile.ts';
import { fileStore } from '../../storage/fileStore.ts';
import { runCompute } from '../../workers/computePool.ts';

export interface ReadTable {
  understood: UnderstoodEarlier;
  around: EarlierSurroundings;
  timeZone: string;
}

/** The table of a stored original, read against the estate as it is today. */
export async function readStoredTable(estateId: string, record: Pick<EarlierFile, 'fileId' | 'fileName'>, { answers, now }: { answers: LabAnswers; now: Date }): Promise<ReadTable> {
  const file = await StoredFile.query().findOne({ estateId, id: record.fileId }).throwIfNotFound();
  const raw = await fileStore().withPath(file.sha256, (path) => readRaw(path, record.fileName));
  return readAgainst(estateId, raw, { answers, now });
}

export function readRaw(path: string, fileName: string): Promise<RawLabFile> {
  return runCompute<RawLabFile>('labFile', { path, fileName, use: 'earlier' }, { lane: 'quick' });
}

export async function readAgainst(estateId: string, raw: RawLabFile, { answers, now }: { answers: LabAnswers; now: Date }): Promise<ReadTable> {
  const { timeZone } = await Estate.query().findById(estateId).throwIfNotFound();
  const measures = await MeasureRecord.query().where({ estateId, inUse: true }).orderBy('code');
  const around = {
    blocks: await earlierBlocks(estateId),
    measures: measures.map(({ code, name, unit, decimals, minimum, maximum }) => ({ code, name, unit, decimals, minimum, maximum })),
    today: dayIn(timeZone, now),
  };
  return { understood: understandEarlier(raw, around, answers), around, timeZone };
}

async function earlierBlocks(estateId: string): Promise<EarlierBlock[]> {
  const blocks = await Block.query().where({ estateId }).whereNull('retiredAt').orderBy('name').select('id');
  const out: EarlierBlock[] = [];
  for (const { id } of blocks) {
    const { block, stored, rows, vines } = await loadBlockVines(estateId, id);
    out.push({
      id,
      name: block.name,
      plantedYear: block.plantedYear,
      epsg: block.epsg,
      vineOneEnd: block.vineOneEnd,
      withoutRows: block.withoutRows,
      rows: rows.rows,
      vines,
      named: stored.map((row) => ({ rowId: row.id, label: row.label, labelWas: row.labelWas })),
    });
  }
  return out;
}

/** Entries without those that the estate has already: same vine, measure, day and value, not left out. */
export async function withoutKnown(estateId: string, entries: readonly EarlierEntry[], { timeZone, trx }: { timeZone: string; trx?: TransactionOrKnex }): Promise<EarlierEntry[]> {
  const blockIds = [...new Set(entries.map(({ blockId }) => blockId))];
  const stored = (await Reading.query(trx)
    .where({ estateId })
    .whereIn('blockId', blockIds)
    .whereIn('measureCode', [...new Set(entries.map(({ measure }) => measure))])
    .whereNotNull('rowId')
    .whereNull('excludedReason')
    .select('rowId', 'ordinal', 'measureCode', 'value', 'takenAt')) as (Reading & { rowId: string; ordinal: number })[];
  const format = new Intl.DateTimeFormat('en-CA', { timeZone, year: 'numeric', month: '2-digit', day: '2-digit' });
  const known = new Set(stored.map(({ rowId, ordinal, measureCode, value, takenAt }) => readingKey({ rowId, ordinal, measure: measureCode, day: format.format(takenAt), value })));
  return entries.filter((entry) => !known.has(readingKey(entry)));
}
