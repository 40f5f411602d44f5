import { cellText, isBlank, labelIn, looksNumeric } from './cells.ts';
import type { RawCell, RawSheet } from './labFile.ts';
import type { Asking } from './questions.ts';
import { roleOfTitle } from './titles.ts';

/**
 * Two tables side by side, each with its own column of labels, as one below the other: left as they are, the figures of the
 * right one would be given to the labels of the left. The lines of the right table are counted on below the sheet.
 */
export function standBelow(sheet: RawSheet, asking: Asking): RawSheet {
  const [, ...starts] = labelColumns(sheet.rows);
  if (starts.length === 0) return sheet;
  const rows: (readonly RawCell[])[] = sheet.rows.map((row) => row.slice(0, starts[0]));
  for (const [at, start] of starts.entries()) {
    asking.say('tablesBeside', { column: start + 1, line: rows.length + 1 });
    rows.push(...sheet.rows.map((row) => row.slice(start, starts[at + 1])));
  }
  return { ...sheet, rows };
}

/** Columns where a table of its own begins, from left to right. A remark that names another bag is none: its title says no label, or no figures follow. */
function labelColumns(rows: RawSheet['rows']): number[] {
  const width = Math.max(0, ...rows.map((row) => row.length));
  const all = Array.from({ length: width }, (_, column) => column).filter((column) => rows.filter((row) => labelIn(row[column]) !== null).length >= 2);
  const [first] = all;
  return all.filter((column, at) => {
    if (column === first) return true;
    const lines = rows.filter((row) => labelIn(row[column]) !== null);
    const head = rows.slice(0, rows.indexOf(lines[0]!)).reverse().map((row) => cellText(row[column])).find((text) => text !== '');
    const isTitled = head === undefined || roleOfTitle(head, []).kind === 'code';
    const end = all[at + 1] ?? width;
    const hasFigures = lines.filter((row) => row.slice(column + 1, end).some(looksNumeric)).length >= 2;
    return isTitled && hasFigures && lines.some((row) => labelIn(row[column]) !== labelIn(row[first!]));
  });
}

export interface Line {
  readonly line: number;
  readonly cells: readonly RawCell[];
}

/** A part of a sheet below titles of its own. */
interface Part {
  readonly titles: readonly string[];
  readonly codeColumn: number;
  readonly rows: readonly Line[];
}

/**
 * Tables one below the other as one wide table: the columns of each later one are put beside those before it, so that every
 * figure keeps its own title. A line that repeats the titles, as on every printed page, is dropped.
 */
export function joinParts(parts: readonly Part[], asking: Asking): Part {
  const [first, ...later] = parts as [Part, ...Part[]];
  let titles = [...first.titles];
  const rows = [...first.rows];
  for (const part of later) {
    const line = part.rows[0]!.line;
    if (part.codeColumn === first.codeColumn && sameTitles(part.titles, first.titles)) {
      asking.say('titlesAgain', { line });
      rows.push(...part.rows);
      continue;
    }
    asking.say('tablesBelow', { line });
    const offset = titles.length;
    titles = [...titles, ...part.titles.map((title, column) => (column === part.codeColumn ? `#${offset + column + 1}` : title))];
    rows.push(...part.rows.map(({ line, cells }) => ({ line, cells: wide(cells, { offset, from: part.codeColumn, to: first.codeColumn }) })));
  }
  return { titles, codeColumn: first.codeColumn, rows };
}

function wide(cells: readonly RawCell[], { offset, from, to }: { offset: number; from: number; to: number }): RawCell[] {
  const before = Array.from({ length: offset }, (_, column) => (column === to ? (cells[from] ?? null) : null));
  return [...before, ...cells.map((cell, column) => (column === from ? null : cell))];
}

const sameTitles = (one: readonly string[], other: readonly string[]): boolean => one.every((title, at) => title === other[at] || title.startsWith('#')) && one.some((title) => !title.startsWith('#'));

/** Lines that name columns once more, below the first table: words only, among them measures or the label's own title. */
export function startsOfLaterTables(lines: readonly Line[], first: number, namesColumns: (line: Line) => boolean): number[] {
  const starts: number[] = [];
  lines.forEach((line, at) => {
    if (at <= first || line.cells.some((cell) => labelIn(cell) !== null || typeof cell === 'number') || line.cells.filter((cell) => !isBlank(cell)).length < 2) return;
    const next = lines.slice(at + 1).findIndex(({ cells }) => cells.some((cell) => labelIn(cell) !== null));
    const isHead = namesColumns(line) && next >= 0 && next < 3;
    if (isHead) starts.push(at + 1 + next);
  });
  return [...new Set(starts)];
}
