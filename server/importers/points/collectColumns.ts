import type { ImportWarning } from '../understood.ts';
import { cellNumber, columnMark, isMissingWord, plainNumber, type DecimalMark } from '../../../shared/importing/cellNumbers.ts';
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
    const values = new Float64Array(kept.length);
    const units = new Set<string>();
    let filled = 0;
    let numeric = 0;
    const own = columnMark(cells, mark);
    for (let at = 0; at < cells.length; at++) {
      const cell = cells[at]!;
      const plain = plainNumber(cell, own);
      if (plain !== null) {
        values[at] = plain;
        filled++;
        numeric++;
        continue;
      }
      const { value, unit } = cellNumber(cell, own);
      values[at] = value;
      if (cell !== '' && !isMissingWord(cell)) filled++;
      if (!Number.isNaN(value)) numeric++;
      if (unit !== '' && units.size < 4) units.add(unit);
    }
    if (filled === 0 || numeric < MOSTLY * filled) {
      out.texts.set(name, cells);
      out.warnings.push(...textWarnings(name, cells));
      continue;
    }
    out.numbers.set(name, values);
    if (units.size > 0)
      out.warnings.push({
        code: 'units-in-cells',
        text: `Column "${name}" has units in its cells (${[...units].slice(0, 3).join(', ')}); the numbers are used as they stand.`,
        params: { column: name, units: [...units].slice(0, 3).join(', ') },
      });
    if (numeric < filled) out.warnings.push({ code: 'not-numbers', text: `Column "${name}" has ${filled - numeric} cells that are not numbers; they count as missing.`, params: { column: name, count: filled - numeric } });
  }
  return out;
}

function textWarnings(name: string, cells: readonly string[]): ImportWarning[] {
  const warnings: ImportWarning[] = [];
  if (cells.some((cell) => /^[=@]/.test(cell))) warnings.push({ code: 'formula-cells', text: `Column "${name}" holds formulas; they are kept as text and not worked out.`, params: { column: name } });
  const dates = ambiguousDates(cells);
  if (dates !== null) warnings.push({ code: 'ambiguous-dates', text: `Column "${name}" has dates such as ${dates}, in which day and month cannot be told apart.`, params: { column: name, example: dates } });
  return warnings;
}

/** An example when every date fits both orders of day and month and not all are the same day and month. */
function ambiguousDates(cells: readonly string[]): string | null {
  const dates = cells.filter((cell) => cell !== '').map((cell) => /^(\d{1,2})[/.-](\d{1,2})[/.-](\d{2,4})\b/.exec(cell));
  if (dates.length === 0 || dates.some((date) => date === null || Number(date[1]) > 12 || Number(date[2]) > 12)) return null;
  return dates.find((date) => date![1] !== date![2])?.[0] ?? null;
}
