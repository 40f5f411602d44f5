import Papa from 'papaparse';
import { vineStateOf } from '../../../shared/catalog/vineStateWords.ts';
import type { CensusMark } from '../../../shared/contracts/rows.ts';
import { Unusable } from '../../errors.ts';

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
  const errors: { path: string; message: string }[] = [];
  data.slice(headed ? 1 : 0).forEach((line, at) => {
    const read = markOf(line, byLabel);
    if (typeof read === 'string') errors.push({ path: `line ${at + (headed ? 2 : 1)}`, message: read });
    else marks.push(read);
  });
  if (data.length === 0) throw new Unusable('emptyTable', 'The table is empty. Paste lines of row number, vine number and state.');
  if (errors.length > 0) {
    const [{ path, message }] = errors as [{ path: string; message: string }];
    throw new Unusable('badTable', `${errors.length} of ${data.length} lines cannot be used; nothing was saved. In ${path}: ${message}`, { errors: errors.slice(0, shownErrors) });
  }
  return marks;
}

function markOf(line: readonly string[], rows: ReadonlyMap<string, NumberedRow>): CensusMark | string {
  const [label = '', vine = '', word = ''] = line.map((cell) => cell.trim());
  if (line.length < 3) return `three columns are needed, row, vine and state, and this line has ${line.length}.`;
  const row = rows.get(label);
  if (!row) return `there is no row ${label || '(empty)'} in this block.`;
  const ordinal = row.ordinalOf(Number(vine));
  if (vine === '' || ordinal === null) return `row ${label} has vines 1 to ${row.vineCount}, not ${vine || '(empty)'}.`;
  const state = vineStateOf(word);
  if (state === null) return `"${word.slice(0, 40)}" is no state; write missing, dead, replant, off-type, sick or living.`;
  return { rowId: row.rowId, ordinal, state };
}

/** The mark that parts the columns, told from the first line; a spreadsheet pastes tabs. */
function delimiterOf(text: string): string {
  const line = text.trim().split(/\r?\n/, 1)[0] ?? '';
  return ['\t', ';', ','].find((mark) => line.includes(mark)) ?? ' ';
}
