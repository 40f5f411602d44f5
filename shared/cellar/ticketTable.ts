import { kgPerUnit, longestTicketNo, mostLoadKg, type MassUnit } from '../contracts/tickets.ts';
import { columnNamed, dateOrderOf, dayIn, decimalMarkOf, numberIn, plainWords, readPastedTable, type DateOrder, type DecimalMark } from '../ripening/pastedTable.ts';
import { isFruitDay, type SeasonDays } from '../season/ofSeason.ts';

/**
 * Scale tickets from a weighbridge's table: number, lot, gross and tare (or net alone), unit, day and time. What could
 * be read in two ways is asked; a net that is not gross less tare is told.
 */
export interface ReadTicket {
  readonly line: number;
  readonly ticketNo: string;
  readonly lotId: string;
  readonly lotName: string;
  readonly gross: number;
  readonly tare: number;
  readonly unit: MassUnit;
  readonly day: string;
  /** "hh:mm" as written, or noon where no time is given. */
  readonly time: string;
  /** Only the net weight was there: gross is set to it and tare to 0. */
  readonly netOnly: boolean;
}

export type TicketQuestion = 'dateOrder' | 'decimalMark' | 'unit';
export type TicketProblemCode =
  | 'empty'
  | 'tooMany'
  | 'noNumberColumn'
  | 'noLotColumn'
  | 'noWeightColumn'
  | 'noDayColumn'
  | 'noTicketNo'
  | 'unknownLot'
  | 'noWeight'
  | 'tareAbove'
  | 'netDiffers'
  | 'noDay'
  | 'noTime'
  | 'outOfSeason'
  | 'tooHeavy'
  | 'longNumber'
  | 'twice'
  | 'known'
  | 'unknownUnit';
export interface TicketProblem {
  readonly code: TicketProblemCode;
  readonly line: number | null;
  readonly cell: string;
}

export interface TicketAnswers {
  readonly dateOrder?: DateOrder | null;
  readonly decimalMark?: DecimalMark | null;
  readonly unit?: MassUnit | null;
}

export interface TicketContext {
  readonly lots: readonly { readonly id: string; readonly name: string }[];
  /** Numbers that are entered already. */
  readonly known: readonly string[];
  /** The season of these lots. */
  readonly season: SeasonDays;
}

export interface ReadTickets {
  readonly tickets: readonly ReadTicket[];
  readonly questions: readonly TicketQuestion[];
  readonly problems: readonly TicketProblem[];
}

type Use = 'ticketNo' | 'lot' | 'gross' | 'tare' | 'net' | 'unit' | 'day' | 'time';

const words: Record<Use, readonly string[]> = {
  ticketNo: ['ticket', 'boletin', 'bon', 'bolletta', 'bolla', 'talao', 'number', 'numero', 'no', 'nr'],
  lot: ['lot', 'lote', 'lotto'],
  gross: ['gross', 'bruto', 'brut', 'lordo'],
  tare: ['tare', 'tara'],
  net: ['net', 'neto', 'netto', 'liquido'],
  unit: ['unit', 'unidad', 'unite', 'unita', 'unidade'],
  day: ['date', 'day', 'fecha', 'dia', 'jour', 'data', 'giorno', 'weighed'],
  time: ['time', 'hour', 'hora', 'heure', 'ora'],
};
const unitWords: Readonly<Record<string, MassUnit>> = { kg: 'kg', t: 't', tonne: 't', tonnes: 't', lb: 'lb', lbs: 'lb', pounds: 'lb', ton: 'shortTon', tons: 'shortTon', 'short ton': 'shortTon', 'short tons': 'shortTon' };
const mostTickets = 2000;
/** Kilograms by which a printed net may differ from gross less tare: rounding. */
const netToleranceKg = 1;

export function readTickets(text: string, context: TicketContext, answers: TicketAnswers = {}): ReadTickets {
  const table = readPastedTable(text);
  const at = Object.fromEntries((Object.keys(words) as Use[]).map((use) => [use, columnNamed(table.names, words[use])])) as Record<Use, number>;
  const whole = (code: TicketProblemCode): ReadTickets => ({ tickets: [], questions: [], problems: [{ code, line: null, cell: '' }] });
  if (table.rows.length === 0) return whole('empty');
  if (table.rows.length > mostTickets) return whole('tooMany');
  if (at.ticketNo < 0) return whole('noNumberColumn');
  if (at.lot < 0) return whole('noLotColumn');
  if ((at.gross < 0 || at.tare < 0) && at.net < 0) return whole('noWeightColumn');
  if (at.day < 0) return whole('noDayColumn');

  const cells = (use: Use) => (at[use] < 0 ? [] : table.rows.flatMap((row) => (row.cells[at[use]] ? [row.cells[at[use]]!] : [])));
  const order = answers.dateOrder ?? dateOrderOf(cells('day'));
  const mark = answers.decimalMark ?? decimalMarkOf([...cells('gross'), ...cells('tare'), ...cells('net')]);
  const unit = answers.unit ?? (at.unit >= 0 ? null : unitInHead(table.names.filter((_, index) => [at.gross, at.tare, at.net].includes(index))));
  const questions: TicketQuestion[] = [...(order === null ? ['dateOrder' as const] : []), ...(mark === null ? ['decimalMark' as const] : []), ...(at.unit < 0 && unit === null ? ['unit' as const] : [])];
  const read = table.rows.map((row) => readLine(row, { at, context, order: order ?? 'dmy', mark: mark ?? '.', unit }));
  const tickets = read.flatMap((each) => ('code' in each ? [] : [each]));
  return { tickets, questions, problems: questions.length > 0 ? [] : [...read.flatMap((each) => ('code' in each ? [each] : [])), ...twice(tickets)] };
}

function unitInHead(names: readonly string[]): MassUnit | null {
  const parts = names.flatMap((name) => plainWords(name).split(' '));
  const found = new Set(parts.flatMap((part) => unitWords[part] ?? []));
  const [only] = found;
  return found.size === 1 ? only! : null;
}

interface How {
  at: Record<Use, number>;
  context: TicketContext;
  order: DateOrder;
  mark: DecimalMark;
  unit: MassUnit | null;
}

function readLine({ line, cells }: { line: number; cells: readonly string[] }, { at, context, order, mark, unit }: How): ReadTicket | TicketProblem {
  const cellOf = (use: Use) => (at[use] < 0 ? '' : (cells[at[use]] ?? ''));
  const problem = (code: TicketProblemCode, cell: string): TicketProblem => ({ code, line, cell });
  const ticketNo = cellOf('ticketNo');
  if (ticketNo === '') return problem('noTicketNo', '');
  if (ticketNo.length > longestTicketNo) return problem('longNumber', `${ticketNo.slice(0, longestTicketNo)}…`);
  if (context.known.includes(ticketNo)) return problem('known', ticketNo);
  const lot = context.lots.find(({ name }) => plainWords(name) === plainWords(cellOf('lot')));
  if (lot === undefined) return problem('unknownLot', cellOf('lot'));
  const own = unit ?? (at.unit < 0 ? 'kg' : unitWords[plainWords(cellOf('unit'))]);
  if (own === undefined) return problem('unknownUnit', cellOf('unit'));
  const weight = (use: 'gross' | 'tare' | 'net') => (cellOf(use) === '' ? null : numberIn(cellOf(use), mark));
  const [gross, tare, net] = [weight('gross'), weight('tare'), weight('net')];
  const wrong = (['gross', 'tare', 'net'] as const).find((use) => Number.isNaN(weight(use)) || (weight(use) ?? 0) < 0);
  if (wrong) return problem('noWeight', cellOf(wrong));
  const netOnly = gross === null || tare === null;
  const [told, empty] = netOnly ? [net, 0] : [gross, tare];
  if (told === null || !(told > 0)) return problem('noWeight', cellOf('net'));
  if (told * kgPerUnit[own] > mostLoadKg) return problem('tooHeavy', cellOf(netOnly ? 'net' : 'gross'));
  if (empty >= told) return problem('tareAbove', `${cellOf('gross')} / ${cellOf('tare')}`);
  if (!netOnly && net !== null && Math.abs(gross - tare - net) * kgPerUnit[own] > netToleranceKg) return problem('netDiffers', cellOf('net'));
  const day = dayIn(cellOf('day'), order);
  if (day === null) return problem('noDay', cellOf('day'));
  if (!isFruitDay(day, context.season)) return problem('outOfSeason', cellOf('day'));
  const clock = cellOf('time') || cellOf('day').replace(/^\S+\s*/, '');
  const time = clock === '' ? '12:00' : timeIn(clock);
  if (time === null) return problem('noTime', clock);
  return { line, ticketNo, lotId: lot.id, lotName: lot.name, gross: told, tare: empty, unit: own, day, time, netOnly };
}

/** "hh:mm" of a time of day, also with a or p for the half of the day; null when there is no such time. `timeIn('2:30 pm')` is 14:30. */
function timeIn(cell: string): string | null {
  const found = /(\d{1,2})[:h.](\d{2})(?!\d)(?:.*?\b([ap])\.?\s?m\b)?/i.exec(cell);
  if (!found) return null;
  const [typed, minute, half] = [Number(found[1]), Number(found[2]), found[3]?.toLowerCase()];
  if (half && (typed < 1 || typed > 12)) return null;
  const hour = half ? (typed % 12) + (half === 'p' ? 12 : 0) : typed;
  return hour > 23 || minute > 59 ? null : `${String(hour).padStart(2, '0')}:${found[2]}`;
}

function twice(tickets: readonly ReadTicket[]): TicketProblem[] {
  const seen = new Set<string>();
  return tickets.flatMap(({ ticketNo, line }) => {
    if (seen.has(ticketNo)) return [{ code: 'twice' as const, line, cell: ticketNo }];
    seen.add(ticketNo);
    return [];
  });
}
