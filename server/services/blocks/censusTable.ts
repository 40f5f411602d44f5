import Papa from 'papaparse';
import { vineStateOf } from '../../../shared/catalog/vineStateWords.ts';
import type { CensusMark } from '../../../shared/contracts/rows.ts';
import { Unusable } from '../../errors.ts';
import { say, type Sentence } from '../../sentences/say.ts';

/** What a table needs to be understood: which row carries a number, and which place in it a vine number is. */
export interface NumberedRow {
  rowId: string;
  label: string;
  ordinalOf: (vineNumber: number) => number | null;
  vineCount: number;
}

const shownErrors = 20;

/** Reads a pasted table of row number, vine number and state. All lines are right or nothing is taken. */
export function readCensusTable(text: string, rows: readonly NumberedRow[]): CensusMark[] {
  const { data } = Papa.parse<string[]>(text.trim(), { skipEmptyLines: 'greedy', delimiter: delimiterOf(text) });
  const byLabel = new Map(rows.map((row) => [row.label, row]));
  const first = data[0] ?? [];
  const headed = first.length >= 3 && vineStateOf(first[2]!) === null && Number.isNaN(Number(first[1]));
  const marks: CensusMark[] = [];
  const errors: { line: number; problem: Sentence }[] = [];
  data.slice(headed ? 1 : 0).forEach((line, at) => {
    const read = markOf(line, byLabel);
    if ('key' in read) errors.push({ line: at + (headed ? 2 : 1), problem: read });
    else marks.push(read);
  });
  if (data.length === 0) throw new Unusable('emptyTable', say('emptyTable'));
  if (errors.length > 0) {
    const [{ line, problem }] = errors as [{ line: number; problem: Sentence }];
    throw new Unusable('badTable', say('badTable', { bad: errors.length, lines: data.length, line, problem }), { errors: errors.slice(0, shownErrors).map((each) => ({ path: `line ${each.line}`, message: each.problem })) });
  }
  return marks;
}

function markOf(line: readonly string[], rows: ReadonlyMap<string, NumberedRow>): CensusMark | Sentence {
  const [label = '', vine = '', word = ''] = line.map((cell) => cell.trim());
  if (line.length < 3) return say('censusColumns', { count: line.length });
  const row = rows.get(label);
  if (!row) return say('censusRow', { row: label || '–' });
  const ordinal = row.ordinalOf(Number(vine));
  if (vine === '' || ordinal === null) return say('censusVine', { row: label, last: row.vineCount, vine: vine || '–' });
  const state = vineStateOf(word);
  if (state === null) return say('censusState', { word: word.slice(0, 40) });
  return { rowId: row.rowId, ordinal, state };
}

/** The mark that parts the columns, told from the first line; a spreadsheet pastes tabs. */
function delimiterOf(text: string): string {
  const line = text.trim().split(/\r?\n/, 1)[0] ?? '';
  return ['\t', ';', ','].find((mark) => line.includes(mark)) ?? ' ';
}
