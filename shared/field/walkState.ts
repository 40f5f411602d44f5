import type { FieldMeasure, FieldRound, WalkStop } from '../contracts/rounds.ts';

/** What was typed in a round, as far as the walk needs it. */
export interface WalkEntry {
  readonly id: string;
  /** `pick`: fruit of the vine is in the bag that is open. */
  readonly kind: 'reading' | 'finding' | 'pick';
  readonly targetId: string | null;
  readonly measureCode: string | null;
  readonly rowId: string;
  readonly ordinal: number;
  readonly at: string;
}

export interface StopVine {
  readonly rowId: string;
  readonly rowLabel: string;
  readonly ordinal: number;
  readonly vineNumber: number;
  /** Longitude and latitude, where vines stand without rows. */
  readonly place?: readonly [number, number] | undefined;
  readonly isReserve: boolean;
}

/** What of a round tells which vines are still to be read. */
type WalkRound = Pick<FieldRound, 'measures' | 'received' | 'readAsks'>;

/** Measures read at a stop: those of the field; where all are for the lab, they are read here if somebody types them. */
export function askedAt(round: Pick<FieldRound, 'measures'>, stop: WalkStop): FieldMeasure[] {
  const here = round.measures.filter(({ code }) => stop.measures.includes(code));
  const field = here.filter(({ measuredIn }) => measuredIn === 'field');
  return field.length > 0 ? field : here;
}

/** The vine to read at a stop: the target, its reserve when something else stands there, or null when neither can be read. */
export function vineAt(stop: WalkStop, entries: readonly WalkEntry[]): StopVine | null {
  const isFound = (rowId: string, ordinal: number) => entries.some((entry) => entry.kind === 'finding' && entry.rowId === rowId && entry.ordinal === ordinal);
  const isLeft = isFound(stop.rowId, stop.ordinal) || (stop.atReserve === true && stop.reserve !== null);
  if (!isLeft) return { rowId: stop.rowId, rowLabel: stop.rowLabel, ordinal: stop.ordinal, vineNumber: stop.vineNumber, place: stop.place, isReserve: false };
  if (stop.reserve === null || isFound(stop.reserve.rowId, stop.reserve.ordinal)) return null;
  return { ...stop.reserve, isReserve: true };
}

/** Measures that are still to be read at a stop: neither here nor, as far as the phone was told, by anybody else of the round. */
export function openAt(round: WalkRound, stop: WalkStop, entries: readonly WalkEntry[]): FieldMeasure[] {
  if (vineAt(stop, entries) === null) return [];
  const isPicked = entries.some((entry) => entry.kind === 'pick' && entry.targetId === stop.targetId);
  const isRead = (code: string) =>
    entries.some((entry) => entry.kind === 'reading' && entry.targetId === stop.targetId && entry.measureCode === code) ||
    isReceived(round, stop, code);
  return askedAt(round, stop).filter(({ code, measuredIn }) => !isRead(code) && !(isPicked && measuredIn === 'lab'));
}

function isReceived({ received, readAsks = [] }: WalkRound, { targetId }: WalkStop, code: string): boolean {
  return [...received, ...readAsks].some((reading) => reading.targetId === targetId && reading.measureCode === code);
}

/** Whether all at a stop was read by others: whoever walks here has not stood there. */
export function isOthersStop(round: Pick<FieldRound, 'received' | 'readAsks'>, { targetId }: WalkStop, entries: readonly WalkEntry[]): boolean {
  return (round.readAsks ?? []).some((ask) => ask.targetId === targetId) && !round.received.some((reading) => reading.targetId === targetId) && !entries.some((entry) => entry.targetId === targetId);
}

export function isStopDone(round: WalkRound, stop: WalkStop, entries: readonly WalkEntry[]): boolean {
  return openAt(round, stop, entries).length === 0;
}

/** The next stop after `from` (index) that is open, going round to those passed over; null when the walk is done. */
export function nextOpenStop(round: WalkRound & Pick<FieldRound, 'stops'>, entries: readonly WalkEntry[], from = 0): number | null {
  const count = round.stops.length;
  for (let step = 0; step < count; step++) {
    const index = (from + step) % count;
    if (!isStopDone(round, round.stops[index]!, entries)) return index;
  }
  return null;
}
