import type { ImportWarning } from '../understood.ts';
import { cellNumber, columnMark, type DecimalMark } from '../../../shared/importing/cellNumbers.ts';
import { readAngle } from '../../../shared/importing/degrees.ts';
import type { ParsedTable } from './parseTable.ts';
import type { PositionColumns } from '../../../shared/importing/positionColumns.ts';

export interface PositionReading {
  /** Indexes of the rows with a usable position. */
  kept: number[];
  x: Float64Array;
  y: Float64Array;
  setAside: { reason: string; count: number; rows: number[] }[];
  warnings: ImportWarning[];
}

interface Reading {
  mark: DecimalMark;
  swap: boolean;
}

/** How many row numbers of each reason are listed. */
const LISTED = 20;

/** Positions of all rows; a row without one is set aside with its reason, never guessed. */
export function readPositions(table: ParsedTable, columns: PositionColumns, { mark, swap }: Reading): PositionReading {
  const kept: number[] = [];
  const x = new Float64Array(table.rows.length);
  const y = new Float64Array(table.rows.length);
  const aside = new Map<string, number[]>();
  let sexagesimal = 0;
  let lettersSwapped = 0;
  const [markX, markY] = [columns.x, columns.y].map((column) => positionMark(table.rows.map((cells) => cells[column] ?? ''), { mark, isAngle: columns.frame === 'lonlat' })) as [DecimalMark, DecimalMark];
  const packed = packedMinutes(table, columns, { x: markX, y: markY });
  for (const [row, cells] of table.rows.entries()) {
    const [first, second] = [readCell(cells[columns.x] ?? '', markX), readCell(cells[columns.y] ?? '', markY)].map((cell, at) => packed?.(cell, cells, at) ?? cell) as [Cell, Cell];
    // Hemisphere letters say which is which whatever the columns are called.
    const crossed = first.axis === 'lat' && second.axis === 'lon';
    const [a, b] = crossed !== swap ? [second.value, first.value] : [first.value, second.value];
    const reason = whyAside(cells, { columns, a, b, width: table.names.length });
    if (reason !== null) {
      const rows = aside.get(reason) ?? [];
      rows.push(table.rowNumbers[row]!);
      aside.set(reason, rows);
      continue;
    }
    if (first.isSexagesimal || second.isSexagesimal) sexagesimal++;
    if (crossed) lettersSwapped++;
    x[kept.length] = a;
    y[kept.length] = b;
    kept.push(row);
  }
  const warnings: ImportWarning[] = [];
  if (sexagesimal > 0)
    warnings.push({
      code: 'degrees-minutes',
      text: `Its positions are written in degrees and minutes; they are turned into decimal degrees (the first is ${y[0]!.toFixed(6)}, ${x[0]!.toFixed(6)}).`,
      params: { count: sexagesimal },
    });
  if (lettersSwapped > 0) warnings.push({ code: 'letters-swapped', text: 'The letters N, S, E, W say that latitude and longitude stand in each other’s column; the letters are followed.', params: { count: lettersSwapped } });
  return { kept, x, y, warnings, setAside: [...aside].map(([reason, rows]) => ({ reason, count: rows.length, rows: rows.slice(0, LISTED) })) };
}

/** The mark of a column of positions: what would be no angle with thousands in it has decimals. */
function positionMark(cells: readonly string[], { mark, isAngle }: { mark: DecimalMark; isAngle: boolean }): DecimalMark {
  const own = columnMark(cells, mark);
  const other = own === '.' ? ',' : '.';
  const isAnAngle = (as: DecimalMark) => cells.every((cell) => !(Math.abs(cellNumber(cell, as).value) > 180));
  return isAngle && !isAnAngle(own) && isAnAngle(other) ? other : own;
}

interface Cell {
  value: number;
  axis: 'lat' | 'lon' | null;
  isSexagesimal: boolean;
}

/**
 * Receivers write 44° 42.186' as 4442.186, with N or S, E or W in a column of its own (NMEA 0183). Returns how to read such
 * cells; null where any position of the columns named latitude and longitude is no packed angle.
 */
function packedMinutes({ rows }: ParsedTable, { x, y, frame }: PositionColumns, mark: { x: DecimalMark; y: DecimalMark }): ((cell: Cell, cells: readonly string[], at: number) => Cell) | null {
  if (frame !== 'lonlat') return null;
  const values = (column: number, own: DecimalMark) => rows.map((cells) => cellNumber(cells[column] ?? '', own).value).filter((value) => !Number.isNaN(value) && value !== 0);
  // Degrees that nowhere exceed those of the globe are no packed minutes; most tables end here.
  if (!rows.some((cells) => Math.abs(cellNumber(cells[y] ?? '', mark.y).value) > 90)) return null;
  const isPacked = (value: number, most: number) => Math.abs(value) <= 100 * most + 60 && Math.abs(value) % 100 < 60;
  const [lons, lats] = [values(x, mark.x), values(y, mark.y)];
  const isAll = lons.length > 0 && lats.length > 0 && lons.every((value) => isPacked(value, 180)) && lats.every((value) => isPacked(value, 90));
  if (!isAll || !lats.some((value) => Math.abs(value) > 90) || !lons.some((value) => Math.abs(value) > 180)) return null;
  const lettersOf = (pattern: RegExp) => rows[0]!.findIndex((_, column) => rows.every((cells) => pattern.test(cells[column] ?? '')));
  const [south, west] = [lettersOf(/^[NS]$/i), lettersOf(/^[EW]$/i)];
  return ({ value }, cells, at) => {
    const letter = cells[at === 0 ? west : south] ?? '';
    const size = Math.floor(Math.abs(value) / 100) + (Math.abs(value) % 100) / 60;
    return { value: (/^[SW]$/i.test(letter) ? -1 : Math.sign(value)) * size, axis: null, isSexagesimal: true };
  };
}

function readCell(cell: string, mark: DecimalMark): Cell {
  const number = cellNumber(cell, mark);
  if (!Number.isNaN(number.value) && (number.unit === '' || /^(m|ft)$/i.test(number.unit))) return { value: number.value, axis: null, isSexagesimal: false };
  const angle = readAngle(cell, mark);
  return { value: angle.degrees, axis: angle.axis, isSexagesimal: angle.isSexagesimal };
}

interface Checked {
  columns: PositionColumns;
  a: number;
  b: number;
  width: number;
}

function whyAside(cells: readonly string[], { columns, a, b, width }: Checked): string | null {
  if (cells.length < Math.max(columns.x, columns.y) + 1) return 'too few cells';
  if (cells.length > width && cells.slice(width).some((cell) => cell !== '')) return 'too many cells';
  if (cells[columns.x] === '' || cells[columns.y] === '') return 'no position';
  if (Number.isNaN(a) || Number.isNaN(b)) return 'position is not a number';
  return a === 0 && b === 0 ? 'position is 0, 0' : null;
}
