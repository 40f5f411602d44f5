import { unitsOf } from '../units.ts';
import { cellText, isBlank } from './cells.ts';
import type { LabMeasure, RawCell } from './labFile.ts';
import type { LabTable } from './layout.ts';
import { isPlausible } from './plausible.ts';
import type { Asking } from './questions.ts';
import { roughNumber, stepWord } from './shifts.ts';
import { roleOfTitle, unitOfWord } from './titles.ts';

interface Measured {
  readonly column: number;
  readonly fits: (cell: RawCell | undefined) => boolean;
}

/**
 * Lines that stand one column aside while others do not: a figure that cannot be what its title says, and every figure of
 * the line fits one column further. Asked once for all such lines, because some of their figures may look right where they
 * stand (a pH of 3.41 under the acidity).
 */
export function mendLines(table: LabTable, measures: readonly LabMeasure[], asking: Asking): LabTable {
  const columns = table.titles.flatMap((title, column): Measured[] => {
    const role = roleOfTitle(title, measures);
    if (role.kind !== 'measure' || column === table.codeColumn) return [];
    const measure = measures.find(({ code }) => code === role.measure)!;
    const told = role.unit ?? unitOfWord(title, measure.code);
    const units = told !== null ? [told] : unitsOf(measure.code).length > 0 ? unitsOf(measure.code).map(({ id }) => id) : [measure.unit];
    return [{ column, fits: (cell) => units.some((unit) => isPlausible(measure, unit, roughNumber(cell))) }];
  });
  if (columns.length < 2) return table;
  const steps = new Map(table.rows.flatMap((row) => {
    const step = stepOf(row.cells, columns, table.codeColumn);
    return step === null ? [] : [[row, step] as const];
  }));
  // Columns that hold nothing plausible are another matter: a lost mark, another unit.
  if (steps.size > table.rows.length / 2) return table;
  let rows = table.rows;
  for (const step of new Set(steps.values())) {
    const moved = [...steps].filter(([, by]) => by === step).map(([row]) => row);
    const found = columns.map(({ column }) => cellText(moved[0]!.cells[column]) || '–').join('; ');
    const answer = asking.ask(`moved:${stepWord(step)}`, { code: 'moved', params: { line: moved.map(({ line }) => line).join(', '), found }, choices: [stepWord(step), 'leaveOut', 'stay'], suggestion: stepWord(step) });
    if (answer === 'stay') continue;
    rows = rows.flatMap((row) => (!moved.includes(row) ? [row] : answer === stepWord(step) ? [{ ...row, cells: stepped(row.cells, columns, step) }] : []));
  }
  return { ...table, rows };
}

/** By how many columns the figures of a line stand aside; null where they fit, or fit nowhere. */
function stepOf(cells: readonly RawCell[], columns: readonly Measured[], codeColumn: number): 1 | -1 | null {
  const filled = columns.filter(({ column }) => !isBlank(cells[column]));
  // Words ("n.d.") tell nothing of where a line stands.
  if (!filled.some(({ column, fits }) => !Number.isNaN(roughNumber(cells[column])) && !fits(cells[column]))) return null;
  const steps = [1, -1] as const;
  return steps.find((step) => {
    const from = columns.filter(({ column }) => column + step !== codeColumn && !isBlank(cells[column + step]));
    const taken = new Set(from.map(({ column }) => column + step));
    return from.length >= 2 && from.every(({ column, fits }) => fits(cells[column + step])) && filled.every(({ column }) => taken.has(column));
  }) ?? null;
}

function stepped(cells: readonly RawCell[], columns: readonly Measured[], step: 1 | -1): RawCell[] {
  const out = [...cells];
  // What stood beside the columns and is read in them now is not read a second time.
  for (const { column } of columns) out[column + step] = null;
  for (const { column } of columns) out[column] = cells[column + step] ?? null;
  return out;
}
