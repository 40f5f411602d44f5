/**
 * Days for lots: the one that may be picked first goes first, on the first day that has room for it. Red must needs no
 * press on the day it comes in; white and rosé do.
 */
export interface DayRoom {
  readonly day: string;
  /** Tonnes that can be picked, and pressed; null for no limit. */
  readonly pickT: number | null;
  readonly pressT: number | null;
}

export interface LotToPick {
  readonly tonnes: number;
  readonly pressed: boolean;
  /** Not before this day; null for any. */
  readonly earliest: string | null;
}

/** Day of each lot in the order given, or null where no day has room. */
export function pickDays(lots: readonly LotToPick[], days: readonly DayRoom[]): (string | null)[] {
  const room = days.map(({ day, pickT, pressT }) => ({ day, pick: pickT ?? Infinity, press: pressT ?? Infinity }));
  const order = lots.map((_, index) => index).sort((a, b) => (lots[a]!.earliest ?? '').localeCompare(lots[b]!.earliest ?? '') || lots[b]!.tonnes - lots[a]!.tonnes);
  const given: (string | null)[] = lots.map(() => null);
  for (const index of order) {
    const { tonnes, pressed, earliest } = lots[index]!;
    const free = room.find(({ day, pick, press }) => (earliest === null || day >= earliest) && pick >= tonnes && (!pressed || press >= tonnes));
    if (free === undefined) continue;
    free.pick -= tonnes;
    if (pressed) free.press -= tonnes;
    given[index] = free.day;
  }
  return given;
}
