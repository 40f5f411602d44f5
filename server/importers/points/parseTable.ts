import Papa from 'papaparse';
import { usableName } from '../fieldNames.ts';
import { ImportProblem } from '../importProblem.ts';
import { limits } from '../limits.ts';
import type { ImportWarning } from '../understood.ts';

/** A delimited text as rows of cells, header found. */
export interface ParsedTable {
  separator: string;
  names: readonly string[];
  hasHeader: boolean;
  rows: readonly (readonly string[])[];
  /** Line number in the file of each row, counted as a spreadsheet does. */
  rowNumbers: readonly number[];
  warnings: readonly ImportWarning[];
}

/** Comma-, semicolon-, tab- or bar-separated text (RFC 4180 and its relatives). Throws ImportProblem. */
export function parseTable(text: string): ParsedTable {
  const separator = findSeparator(text);
  const lines = cellsOf(text.replace(/^\uFEFF/, ''), separator);
  if (lines.length > limits.rows) throw new ImportProblem({ code: 'too-large', fact: `It has more than ${limits.rows} rows.`, remedy: 'Split the table, or thin out its points.', params: { why: 'many-rows', most: limits.rows } });
  const all = lines.map((cells, i) => ({ cells, number: i + 1 })).filter(({ cells }) => cells.some((cell) => cell !== ''));
  if (all.length === 0) throw new ImportProblem({ code: 'empty', fact: 'It has no rows.', remedy: 'Export the table again.' });
  const width = usualWidth(all.map(({ cells }) => cells.length));
  if (width < 2) throw new ImportProblem({ code: 'wrong-type', fact: 'It has a single column: no comma, semicolon or tab separates its cells.', remedy: 'Save the table as CSV.', params: { why: 'single-column' } });
  if (width > limits.columns)
    throw new ImportProblem({
      code: 'too-large',
      fact: `It has ${width} columns; ${limits.columns} is the most.`,
      remedy: 'Keep only the columns that are needed.',
      params: { why: 'many-columns', columns: width, most: limits.columns },
    });
  return splitHeader(all, { separator, width });
}

/** Cells by line, trimmed. Throws `damaged` for a quotation mark without its other. */
function cellsOf(text: string, delimiter: string): string[][] {
  // Without quotation marks a line is a row: a long survey is cut in half the time.
  if (!text.includes('"') && !/\r(?!\n)/.test(text)) return text.split('\n').map((line) => line.split(delimiter).map((cell) => cell.trim()));
  const parsed = Papa.parse<string[]>(text, { delimiter, skipEmptyLines: false, transform: (cell) => cell.trim() });
  const quotes = parsed.errors.find(({ type }) => type === 'Quotes');
  if (quotes === undefined) return parsed.data;
  const row = (quotes.row ?? 0) + 1;
  throw new ImportProblem({ code: 'damaged', fact: `A quotation mark that opens in row ${row} is never closed, or stands inside a cell.`, remedy: 'Correct that row, or export the table again.', params: { why: 'open-quote', row } });
}

/** The sign that divides the first lines into the same number of cells, more than one, most often. */
function findSeparator(text: string): string {
  const lines = text.slice(0, 200_000).split(/\r\n|\n|\r/).filter((line) => line.trim() !== '').slice(0, 60);
  const scored = [';', '\t', ',', '|'].map((sign) => {
    const counts = lines.map((line) => line.replace(/"[^"]*"/g, '').split(sign).length - 1);
    const usual = usualWidth(counts);
    return { sign, score: usual === 0 ? 0 : counts.filter((count) => count === usual).length / lines.length + Math.min(usual, 20) / 100 };
  });
  return scored.reduce((best, each) => (each.score > best.score ? each : best)).sign;
}

function usualWidth(widths: readonly number[]): number {
  const counts = new Map<number, number>();
  for (const width of widths) counts.set(width, (counts.get(width) ?? 0) + 1);
  return [...counts].reduce((best, each) => (each[1] > best[1] || (each[1] === best[1] && each[0] > best[0]) ? each : best), [0, 0])[0];
}

interface Row {
  cells: readonly string[];
  number: number;
}

function splitHeader(all: readonly Row[], { separator, width }: { separator: string; width: number }): ParsedTable {
  const warnings: ImportWarning[] = [];
  const start = all.findIndex(({ cells }) => cells.length === width);
  if (start > 0) warnings.push({ code: 'lines-before-table', text: `${start === 1 ? 'One line' : `${start} lines`} before the table ${start === 1 ? 'is' : 'are'} left out.`, params: { count: start } });
  const table = all.slice(start);
  const head = table[0]!.cells;
  const hasHeader = head.every((cell) => !/^[+-]?\d/.test(cell)) && head.filter((cell) => cell !== '').length >= width / 2;
  let body = hasHeader ? table.slice(1) : table;
  if (!hasHeader) warnings.push({ code: 'no-header', text: 'Its first row holds values, not names; the columns are called by their place.' });
  const second = body[0]?.cells ?? [];
  const third = body[1]?.cells ?? [];
  // A second row of units has no number where the rows below have one.
  if (hasHeader && second.every((cell) => !/^[+-]?[\d.,]*\d/.test(cell)) && third.some((cell) => /^[+-]?[\d.,]*\d/.test(cell))) {
    warnings.push({ code: 'unit-row', text: `Row ${body[0]!.number} holds no values and is taken for units.`, params: { row: body[0]!.number } });
    body = body.slice(1);
  }
  return { separator, names: columnNames(hasHeader ? head : [], width, warnings), hasHeader, rows: body.map(({ cells }) => cells), rowNumbers: body.map(({ number }) => number), warnings };
}

/** Every column gets a name of its own. */
function columnNames(head: readonly string[], width: number, warnings: ImportWarning[]): string[] {
  const used = new Set<string>();
  const doubled: string[] = [];
  const names = Array.from({ length: width }, (_, i) => {
    const plain = usableName(head[i] ?? '').slice(0, 120) || `column ${i + 1}`;
    const name = used.has(plain) ? `${plain} (${i + 1})` : plain;
    if (name !== plain) doubled.push(plain);
    used.add(name);
    return name;
  });
  if (doubled.length > 0) warnings.push({ code: 'doubled-columns', text: `Two columns have the same name (${doubled.slice(0, 3).join(', ')}); the later one carries its number.`, params: { names: doubled.slice(0, 3).join(', ') } });
  return names;
}
