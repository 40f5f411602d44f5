import { cellText, isBlank, looksNumeric } from './cells.ts';
import type { RawCell } from './labFile.ts';
import type { LabTable } from './layout.ts';
import type { Asking } from './questions.ts';

const sign = /^(?:[<>≤≥=~≈]|<=|>=)$/;

/**
 * A column of bare signs belongs to the figures beside it: "<" and "0.1" are below 0.1. Joined to the next column of
 * figures, or to the one before; a file that is read without them would turn limits into results.
 */
export function joinQualifiers(table: LabTable, asking: Asking): LabTable {
  const cellsOf = (column: number) => table.rows.map(({ cells }) => cells[column]).filter((cell) => !isBlank(cell));
  const isSigns = (column: number) => column !== table.codeColumn && cellsOf(column).length > 0 && cellsOf(column).every((cell) => sign.test(cellText(cell)));
  const isFigures = (column: number) => column !== table.codeColumn && cellsOf(column).some(looksNumeric);
  const pairs = table.titles.flatMap((_, column) => {
    if (!isSigns(column)) return [];
    const figures = [column + 1, column - 1].find(isFigures);
    return figures === undefined ? [] : [{ column, figures }];
  });
  if (pairs.length === 0) return table;
  for (const { column, figures } of pairs) asking.say('qualifiers', { title: table.titles[column]!, figures: table.titles[figures]! });
  const join = (cells: readonly RawCell[]): RawCell[] => cells.map((cell, at) => {
    if (pairs.some(({ column }) => column === at)) return null;
    const pair = pairs.find(({ figures }) => figures === at);
    const word = pair === undefined || isBlank(cell) ? '' : cellText(cells[pair.column]).replace('<=', '≤').replace('>=', '≥');
    return word === '' || word === '=' ? cell : `${word}${cellText(cell)}`;
  });
  return { ...table, titles: table.titles.map((title, at) => (pairs.some(({ column }) => column === at) ? '' : title)), rows: table.rows.map((row) => ({ ...row, cells: join(row.cells) })) };
}
