import { cellText, plainText } from './cells.ts';
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
    else if (clear === null && cellText(cell) !== '') asking.say('dateUnread', { line, text: cellText(cell).slice(0, 40) });
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
  const worded = /^(?:[a-z]{2,10}[.,]? )?(\d{1,2})(?:er|\.|st|nd|rd|th)?[ -](?:de |di )?([a-z]{3,10})[. -]+(?:de )?(\d{2}|\d{4})\b/.exec(plainText(text));
  if (worded) return dayOf([Number(worded[1]), monthOf(worded[2]!), fullYear(Number(worded[3]))], 'dmy');
  const monthFirst = /^(?:[a-z]{2,10}[.,]{1,2} )?([a-z]{3,10})[. ]+(\d{1,2})(?:st|nd|rd|th)?,? (\d{4})\b/.exec(plainText(text));
  if (monthFirst) return dayOf([Number(monthFirst[2]), monthOf(monthFirst[1]!), Number(monthFirst[3])], 'dmy');
  const compact = /^(20\d{2})(\d{2})(\d{2})$/.exec(text);
  if (compact) return dayOf([Number(compact[3]), Number(compact[2]), Number(compact[1])], 'dmy');
  // A spreadsheet's own count of days, when the cell lost its format.
  if (/^4\d{4}(\.\d+)?$/.test(text)) return new Date(spreadsheetStart + Math.floor(Number(text)) * dayMs).toISOString().slice(0, 10);
  return null;
}

/** First letters of the months in English, French, Spanish, Italian, Portuguese and German, without accents. */
const months = [/^(ja|ene|gen)/, /^(fe)/, /^(ma[er]|mrz|marz)/, /^(av|ap|ab)/, /^(ma[iyg])/, /^(juin|jun|giu)/, /^(juil|jul|lug)/, /^(ao|au|ag)/, /^(se)/, /^(o[ckgu]t|ott)/, /^(no)/, /^(de|di|dez)/];
/** 0 for a word that is no month. */
const monthOf = (word: string) => months.findIndex((start) => start.test(word)) + 1;

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
  const tomorrow = dayAfter(today, 1);
  const fits = possible.filter((order) => dates.every((parts) => (earliest === null || dayOf(parts, order)! >= earliest) && dayOf(parts, order)! <= tomorrow));
  const [a, b, year] = dates.find(([day, month]) => day !== month) ?? dates[0]!;
  if (a === b) return 'dmy';
  if (fits.length === 1 && earliest !== null) {
    asking.say('dateOrderByBags', { example: `${a}/${b}/${year}`, day: dayOf([a, b, year], fits[0]!)! });
    return fits[0]!;
  }
  return asking.ask('dateOrder', { code: 'dateOrder', params: { example: `${a}/${b}/${year}` }, choices: ['dmy', 'mdy'] }) as Order | null;
}

/**
 * Days of analysis that are still to come, or more than a day before the bag was closed: asked about once a file. Until it
 * is answered, and when they are left out, these lines have no day.
 */
export function settleDays(days: ReadonlyMap<number, string>, { closedOn, today }: { closedOn: (line: number) => string | null; today: string }, asking: Asking): ReadonlyMap<number, string> {
  const doubtful = [...days].filter(([line, day]) => day > dayAfter(today, 1) || day < dayAfter(closedOn(line) ?? '1990-01-02', -1));
  if (doubtful.length === 0) return days;
  const [line, day] = doubtful[0]!;
  const answer = asking.ask('dateDoubt', { code: 'dateDoubt', params: { line, day, count: doubtful.length }, choices: ['leaveOut', 'keep'], suggestion: 'leaveOut' });
  return answer === 'keep' ? days : new Map([...days].filter(([each]) => !doubtful.some(([line]) => line === each)));
}

const dayAfter = (day: string, days: number) => new Date(Date.parse(`${day}T00:00:00Z`) + days * dayMs).toISOString().slice(0, 10);
