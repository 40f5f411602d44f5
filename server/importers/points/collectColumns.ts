import type { ImportWarning } from '../understood.ts';
import { cellNumber, type DecimalMark } from './cellNumbers.ts';
import type { ParsedTable } from './parseTable.ts';

export interface CollectedColumns {
  numbers: Map<string, Float64Array>;
  texts: Map<string, string[]>;
  warnings: ImportWarning[];
}

/** A column counts as numbers when this share of its filled cells are. */
const MOSTLY = 0.8;

/** Values of the kept rows by column: numbers with NaN for missing where most cells are numbers, else text. */
export function collectColumns(table: ParsedTable, kept: readonly number[], { mark, skip }: { mark: DecimalMark; skip: readonly number[] }): CollectedColumns {
  const out: CollectedColumns = { numbers: new Map(), texts: new Map(), warnings: [] };
  for (const [column, name] of table.names.entries()) {
    if (skip.includes(column)) continue;
    const cells = kept.map((row) => table.rows[row]![column] ?? '');
    const read = cells.map((cell) => cellNumber(cell, mark));
    const filled = cells.filter((cell) => cell !== '').length;
    const numeric = read.filter(({ value }) => !Number.isNaN(value)).length;
    if (filled === 0 || numeric < MOSTLY * filled) {
      out.texts.set(name, cells);
      if (cells.some((cell) => /^[=@]/.test(cell))) out.warnings.push({ code: 'formula-cells', text: `Column "${name}" holds formulas; they are kept as text and not worked out.`, params: { column: name } });
      const dates = ambiguousDates(cells);
      if (dates !== null) out.warnings.push({ code: 'ambiguous-dates', text: `Column "${name}" has dates such as ${dates}, in which day and month cannot be told apart.`, params: { column: name, example: dates } });
      continue;
    }
    out.numbers.set(name, Float64Array.from(read, ({ value }) => value));
    const units = new Set(read.filter(({ unit }) => unit !== '').map(({ unit }) => unit));
    if (units.size > 0) out.warnings.push({ code: 'units-in-cells', text: `Column "${name}" has units in its cells (${[...units].slice(0, 3).join(', ')}); the numbers are used as they stand.`, params: { column: name, units: [...units].slice(0, 3).join(', ') } });
    if (numeric < filled) out.warnings.push({ code: 'not-numbers', text: `Column "${name}" has ${filled - numeric} cells that are not numbers; they count as missing.`, params: { column: name, count: filled - numeric } });
  }
  return out;
}

/** An example when every date fits both orders of day and month and not all are the same day and month. */
function ambiguousDates(cells: readonly string[]): string | null {
  const dates = cells.filter((cell) => cell !== '').map((cell) => /^(\d{1,2})[/.-](\d{1,2})[/.-](\d{2,4})\b/.exec(cell));
  if (dates.length === 0 || dates.some((date) => date === null || Number(date[1]) > 12 || Number(date[2]) > 12)) return null;
  return dates.find((date) => date![1] !== date![2])?.[0] ?? null;
}
