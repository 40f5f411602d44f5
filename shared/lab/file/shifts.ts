import { readFigure } from '../figure.ts';
import { unitsOf } from '../units.ts';
import { cellText } from './cells.ts';
import type { LooseValue } from './columns.ts';
import type { LabMeasure, RawCell } from './labFile.ts';
import type { LabTable } from './layout.ts';
import { isPlausible } from './plausible.ts';
import type { Asking } from './questions.ts';
import { roleOfTitle } from './titles.ts';

/**
 * Titles that stand one column beside their figures throughout: seen by figures that fit no unit of their title where
 * they stand, and fit well one column aside. Asked, because it changes every figure.
 */
export function mendTitles(table: LabTable, measures: readonly LabMeasure[], asking: Asking): LabTable {
  const columns = table.titles.flatMap((title, column) => {
    const role = roleOfTitle(title, measures);
    return role.kind === 'measure' && column !== table.codeColumn ? [{ column, title, measure: measures.find(({ code }) => code === role.measure)! }] : [];
  });
  if (columns.length < 2) return table;
  const fits = (measure: LabMeasure, cell: RawCell | undefined) => {
    const value = roughNumber(cell);
    const units = unitsOf(measure.code);
    return units.length === 0 ? isPlausible(measure, measure.unit, value) : units.some(({ id }) => isPlausible(measure, id, value));
  };
  const share = (by: number) => {
    const cells = table.rows.flatMap(({ cells }) => columns.map(({ column, measure }) => fits(measure, cells[column + by])));
    return cells.filter(Boolean).length / Math.max(1, cells.length);
  };
  const by = share(0) < 0.5 ? [1, -1].find((step) => share(step) > 0.8) : undefined;
  if (by === undefined) return table;
  const [first] = columns;
  const row = table.rows[0]!.cells;
  const found = cellText(row[first!.column]) || '–';
  const answer = asking.ask('shift', { code: 'shift', params: { title: first!.title, found, wanted: cellText(row[first!.column + by]) }, choices: [stepWord(by), 'stay'], suggestion: stepWord(by) });
  if (answer === 'stay') return table;
  // Until it is answered nothing is read of columns that may be others.
  if (answer === null) return { ...table, rows: [] };
  const titles = table.titles.map((title, column) => (columns.some((moved) => moved.column === column - by) ? table.titles[column - by]! : columns.some((moved) => moved.column === column) ? '' : title));
  return { ...table, titles };
}

export const stepWord = (by: number) => (by > 0 ? 'next' : 'before');

/** A cell's number whatever its decimal mark is; NaN for none. */
export function roughNumber(cell: RawCell | undefined): number {
  const figure = readFigure(cellText(cell), null);
  return figure.kind === 'number' ? figure.value : figure.kind === 'ambiguous' ? figure.asDecimal : Number.NaN;
}

/** Columns of whole numbers, ten, hundred or thousand times too large throughout (342 for 3.42). Null while one is asked about. */
export function mendMarks(values: readonly LooseValue[], measures: readonly LabMeasure[], asking: Asking): LooseValue[] | null {
  const byCode = new Map(measures.map((measure) => [measure.code, measure]));
  const out: LooseValue[] = [];
  let isOpen = false;
  for (const title of new Set(values.map((value) => value.title))) {
    const own = values.filter((value) => value.title === title);
    const numbers = own.map((value) => roughNumber(value.cell)).filter((number) => !Number.isNaN(number));
    const measure = byCode.get(own[0]!.measure)!;
    const fit = (by: number) => numbers.filter((number) => isPlausible(measure, own[0]!.unit, number / by)).length / Math.max(1, numbers.length);
    const by = numbers.length >= 2 && numbers.every(Number.isInteger) && fit(1) < 0.2 ? [10, 100, 1000].find((step) => fit(step) > 0.8) : undefined;
    if (by === undefined) {
      out.push(...own);
      continue;
    }
    const answer = asking.ask(`scale:${title}`, { code: 'scale', params: { title, found: cellText(own[0]!.cell), read: numbers[0]! / by }, choices: ['divide', 'none'], suggestion: 'divide' });
    if (answer === null) isOpen = true;
    if (answer === 'divide') out.push(...own.map((value) => ({ ...value, cell: dividedText(value.cell, by) })));
  }
  return isOpen ? null : out;
}

function dividedText(cell: LooseValue['cell'], by: number): LooseValue['cell'] {
  const figure = readFigure(cellText(cell), null);
  return figure.kind === 'number' ? Number((figure.value / by).toPrecision(12)) : cell;
}
