import { cellText, isBlank, labelIn } from './cells.ts';
import type { RawCell, RawLabFile, RawSheet } from './labFile.ts';
import type { Asking } from './questions.ts';
import { standBelow } from './severalTables.ts';

/**
 * Rows whose cells stand in the wrong place: a row that starts a cell early or late by its own label, and a
 * comma-separated file whose decimal commas divided the figures. The second is asked, since it changes every figure.
 */
export function mendRows(file: RawLabFile, sheet: RawSheet, asking: Asking): RawSheet | null {
  const joined = file.separator === ',' ? joinDecimals(sheet, asking) : sheet;
  if (joined === null) return null;
  return straighten(standBelow(joined, asking), asking);
}

/** `TRKWMH,23,4,3,41` below three titles: whole numbers in twice as many cells as there are titles beside the label. */
function joinDecimals(sheet: RawSheet, asking: Asking): RawSheet | null {
  const labelled = sheet.rows.filter((row) => labelIn(row[0]) !== null);
  if (labelled.length === 0) return sheet;
  const firstAt = sheet.rows.indexOf(labelled[0]!);
  const head = sheet.rows.slice(0, firstAt).reverse().find((row) => row.filter((cell) => !isBlank(cell)).length >= 2);
  const titles = head ? lastFilled(head) : 0;
  const wide = labelled.filter((row) => lastFilled(row) === 1 + 2 * (titles - 1) && row.slice(1, lastFilled(row)).every((cell) => /^[<]?\d+$/.test(cellText(cell))));
  if (titles < 2 || wide.length < labelled.length) return sheet;
  const [first] = labelled;
  const example = `${cellText(first![1])},${cellText(first![2])}`;
  const answer = asking.ask('joined', { code: 'joined', params: { example, titles, cells: lastFilled(first!) }, choices: ['join', 'apart'], suggestion: 'join' });
  if (answer === null) return null;
  if (answer === 'apart') return sheet;
  const rows = sheet.rows.map((row) => (labelled.includes(row) ? [row[0]!, ...Array.from({ length: titles - 1 }, (_, pair) => `${cellText(row[1 + 2 * pair])},${cellText(row[2 + 2 * pair])}`)] : row));
  return { ...sheet, rows };
}

function lastFilled(row: readonly RawCell[]): number {
  return row.reduce<number>((last, cell, at) => (isBlank(cell) ? last : at + 1), 0);
}

/** Most rows have their label in one column; a row that has it one or two cells beside is moved as a whole. */
function straighten(sheet: RawSheet, asking: Asking): RawSheet {
  const columns = sheet.rows.map((row) => row.findIndex((cell) => labelIn(cell) !== null));
  const counts = new Map<number, number>();
  for (const column of columns) if (column >= 0) counts.set(column, (counts.get(column) ?? 0) + 1);
  const [usual, times] = [...counts].sort((a, b) => b[1] - a[1])[0] ?? [-1, 0];
  const others = columns.filter((column) => column >= 0 && column !== usual).length;
  // Samples side by side, or labels all over the place, are another layout.
  if (times < 3 || others === 0 || others > times / 2) return sheet;
  const rows = sheet.rows.map((row, at) => {
    const by = columns[at]! < 0 ? 0 : columns[at]! - usual;
    if (by === 0 || Math.abs(by) > 2) return row;
    asking.say('rowMoved', { line: at + 1 });
    return by > 0 ? row.slice(by) : [...Array.from({ length: -by }, () => null), ...row];
  });
  return { ...sheet, rows };
}
