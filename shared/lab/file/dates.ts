import { cellText } from './cells.ts';
import type { RawCell } from './labFile.ts';
import type { Asking } from './questions.ts';

type Order = 'dmy' | 'mdy';
const dayMs = 86_400_000;
/** Day 0 of spreadsheets that count days from 1900, as an offset from 1970. */
const spreadsheetStart = Date.UTC(1899, 11, 30);

/**
 * Reads the day of analysis of each line. "03/09/2026" is asked about, unless another date of the column, or the days on
 * which the bags were closed and the file was sent, leave one order only.
 */
export function readDates(cells: ReadonlyMap<number, RawCell>, within: { earliest: string | null; today: string }, asking: Asking): ReadonlyMap<number, string> {
  const found = new Map<number, string>();
  const open = new Map<number, [number, number, number]>();
  for (const [line, cell] of cells) {
    const clear = clearDate(cell);
    if (clear !== null) found.set(line, clear);
    const parts = /^(\d{1,2})[/.\- ](\d{1,2})[/.\- ](\d{2}|\d{4})\b/.exec(cellText(cell));
    const triple = parts && ([Number(parts[1]), Number(parts[2]), fullYear(Number(parts[3]))] as [number, number, number]);
    // A day that is none in either order tells nothing about the others.
    if (clear === null && triple && (dayOf(triple, 'dmy') ?? dayOf(triple, 'mdy')) !== null) open.set(line, triple);
  }
  if (open.size === 0) return found;
  const order = orderOf([...open.values()], within, asking);
  if (order === null) return found;
  for (const [line, parts] of open) {
    const day = dayOf(parts, order);
    if (day !== null) found.set(line, day);
  }
  return found;
}

function clearDate(cell: RawCell): string | null {
  if (typeof cell === 'object' && cell !== null) return cell.date;
  const text = cellText(cell);
  const iso = /^(\d{4})[-/.](\d{1,2})[-/.](\d{1,2})/.exec(text);
  if (iso) return dayOf([Number(iso[3]), Number(iso[2]), Number(iso[1])], 'dmy');
  // A spreadsheet's own count of days, when the cell lost its format.
  if (/^4\d{4}(\.\d+)?$/.test(text)) return new Date(spreadsheetStart + Math.floor(Number(text)) * dayMs).toISOString().slice(0, 10);
  return null;
}

const fullYear = (year: number) => (year < 100 ? 2000 + year : year);

function dayOf([a, b, year]: readonly [number, number, number], order: Order): string | null {
  const [day, month] = order === 'dmy' ? [a, b] : [b, a];
  const date = new Date(Date.UTC(year, month - 1, day));
  return date.getUTCMonth() === month - 1 && date.getUTCDate() === day && year > 1990 && year < 2200 ? date.toISOString().slice(0, 10) : null;
}

function orderOf(dates: readonly [number, number, number][], { earliest, today }: { earliest: string | null; today: string }, asking: Asking): Order | null {
  const possible = (['dmy', 'mdy'] as const).filter((order) => dates.every((parts) => dayOf(parts, order) !== null));
  if (possible.length === 1) return possible[0]!;
  if (possible.length === 0) {
    asking.say('datesMixed');
    return null;
  }
  const tomorrow = new Date(Date.parse(`${today}T00:00:00Z`) + dayMs).toISOString().slice(0, 10);
  const fits = possible.filter((order) => dates.every((parts) => (earliest === null || dayOf(parts, order)! >= earliest) && dayOf(parts, order)! <= tomorrow));
  const [a, b, year] = dates.find(([day, month]) => day !== month) ?? dates[0]!;
  if (a === b) return 'dmy';
  if (fits.length === 1 && earliest !== null) {
    asking.say('dateOrderByBags', { example: `${a}/${b}/${year}`, day: dayOf([a, b, year], fits[0]!)! });
    return fits[0]!;
  }
  return asking.ask('dateOrder', { code: 'dateOrder', params: { example: `${a}/${b}/${year}` }, choices: ['dmy', 'mdy'] }) as Order | null;
}
