import { isBlank } from './cells.ts';
import type { RawSheet } from './labFile.ts';
import type { Asking } from './questions.ts';

/** Rows and columns that the spreadsheet does not show, such as last year's or filtered ones, are asked about where they hold something. Until then they are left out. */
export function settleHidden(sheet: RawSheet, asking: Asking): RawSheet {
  if (sheet.emptyFormulas) asking.say('emptyFormulas', { count: sheet.emptyFormulas });
  const { rows = [], columns = [] } = sheet.hidden ?? {};
  const filledRows = rows.filter((row) => sheet.rows[row]?.some((cell) => !isBlank(cell)));
  const filledColumns = columns.filter((column) => sheet.rows.some((row) => !isBlank(row[column])));
  if (filledRows.length + filledColumns.length === 0) return sheet;
  const answer = asking.ask('hidden', { code: 'hidden', params: { rows: filledRows.length, columns: filledColumns.length, lines: filledRows.slice(0, 8).map((row) => row + 1).join(', ') || '–' }, choices: ['show', 'leaveOut'] });
  if (answer === 'show') return sheet;
  return { ...sheet, rows: sheet.rows.map((row, at) => row.map((cell, column) => (filledRows.includes(at) || filledColumns.includes(column) ? null : cell))) };
}
