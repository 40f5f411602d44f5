import Papa from 'papaparse';

/**
 * A table as people paste it or a station exports it: comma, semicolon, tab or bar between cells, decimal comma or
 * point, days in three orders. What could be read in two ways is asked, never guessed.
 */
export interface PastedTable {
  readonly names: readonly string[];
  readonly rows: readonly { readonly line: number; readonly cells: readonly string[] }[];
}

export type DecimalMark = '.' | ',';
export type DateOrder = 'dmy' | 'mdy';

/** First line that is not empty names the columns; `line` counts as a spreadsheet does. */
export function readPastedTable(text: string): PastedTable {
  const { data } = Papa.parse<string[]>(text.replace(/^\uFEFF/, ''), { delimiter: separatorOf(text), transform: (cell) => cell.trim() });
  const filled = data.map((cells, index) => ({ line: index + 1, cells })).filter(({ cells }) => cells.some((cell) => cell !== ''));
  const [head, ...rows] = filled;
  return { names: head?.cells ?? [], rows };
}

function separatorOf(text: string): string {
  const first = text.split(/\r\n|\n|\r/).find((line) => line.trim() !== '') ?? '';
  const count = (mark: string) => first.split(mark).length;
  return ['\t', ';', '|', ','].reduce((best, mark) => (count(mark) > count(best) ? mark : best));
}

/** Index of the column whose name holds one of the words, the earlier word first, or -1. Accents and case do not matter. */
export function columnNamed(names: readonly string[], words: readonly string[]): number {
  const plain = names.map((name) => plainWords(name));
  const exact = plain.findIndex((name) => words.includes(name));
  if (exact >= 0) return exact;
  const found = words.map((word) => plain.findIndex((name) => name.split(' ').includes(word))).find((index) => index >= 0);
  return found ?? -1;
}

export function plainWords(text: string): string {
  return text.normalize('NFD').replace(/\p{M}/gu, '').toLowerCase().replace(/[^\p{L}\p{N}°%]+/gu, ' ').trim();
}

/** Which mark parts the decimals; null when "1,234" or "1.234" could be either and no cell decides. */
export function decimalMarkOf(cells: readonly string[]): DecimalMark | null {
  const votes = new Set<DecimalMark>();
  let unsure = false;
  for (const cell of cells) {
    const last = /[.,](?=[^.,]*$)/.exec(cell)?.[0] as DecimalMark | undefined;
    if (last === undefined) continue;
    if (/^[+-]?[1-9]\d{0,2}[.,]\d{3}$/.test(cell)) unsure = true;
    else votes.add(/^[+-]?\d{1,3}([.,]\d{3}){2,}$/.test(cell) ? (last === ',' ? '.' : ',') : last);
  }
  const [only] = votes;
  if (votes.size === 1 && only !== undefined) return only;
  return votes.size === 0 && !unsure ? '.' : null;
}

/** NaN when the cell is no number; thousands are taken out. `numberIn('1.234,5', ',')` is 1234.5. */
export function numberIn(cell: string, mark: DecimalMark): number {
  const bare = cell.replace(/[\s\u2009\u202f\u00a0']/g, '').replace('\u2212', '-');
  const plain = mark === ',' ? bare.replace(/\./g, '').replace(',', '.') : bare.replace(/,/g, '');
  return /^[+-]?(\d+\.?\d*|\.\d+)$/.test(plain) ? Number(plain) : Number.NaN;
}

/** Order of day and month over a whole column; null when every date could be either. ISO dates need none. */
export function dateOrderOf(cells: readonly string[]): DateOrder | null {
  const parts = cells.flatMap((cell) => {
    const match = /^(\d{1,2})([./-])(\d{1,2})\2\d{2,4}/.exec(cell);
    return match ? [{ first: Number(match[1]), second: Number(match[3]), dotted: match[2] === '.' }] : [];
  });
  if (parts.some(({ first, dotted }) => first > 12 || dotted)) return 'dmy';
  if (parts.some(({ second }) => second > 12)) return 'mdy';
  return parts.length === 0 ? 'dmy' : null;
}

/** yyyy-mm-dd of a cell that begins with a date, or null when there is no such day. `dayIn('3/9/2026', 'dmy')` is 2026-09-03. */
export function dayIn(cell: string, order: DateOrder): string | null {
  const iso = /^(\d{4})[-/.](\d{1,2})[-/.](\d{1,2})(?!\d)/.exec(cell) ?? /^(\d{4})(\d{2})(\d{2})$/.exec(cell);
  const typed = /^(\d{1,2})[-/.](\d{1,2})[-/.](\d{4}|\d{2})(?!\d)/.exec(cell);
  if (iso) return dayOf(Number(iso[1]), Number(iso[2]), Number(iso[3]));
  if (!typed) return null;
  const year = Number(typed[3]) < 100 ? 2000 + Number(typed[3]) : Number(typed[3]);
  const [day, month] = order === 'dmy' ? [Number(typed[1]), Number(typed[2])] : [Number(typed[2]), Number(typed[1])];
  return dayOf(year, month, day);
}

function dayOf(year: number, month: number, day: number): string | null {
  const date = new Date(Date.UTC(year, month - 1, day));
  return date.getUTCMonth() === month - 1 && date.getUTCDate() === day ? date.toISOString().slice(0, 10) : null;
}
