import type { StripChoice, StripRow, StripVine } from './rowStripTypes.ts';
import { nearestPostM, vineAtM, vineEdgeM, vineM } from './stripLayout.ts';

/** How taps, drags and keys turn into a choice; every act works by single taps. */

export interface StripTap {
  readonly rowIndex: number;
  readonly alongM: number;
  /** Shift held: take all rows from the first chosen one to here. */
  readonly extend: boolean;
}

export const wholeRows = (rowIds: readonly string[]): StripChoice => ({ rowIds, fromM: null, toM: null });

/**
 * First tap takes the row; a second tap on a chosen row sets from where (at the nearest post), a third to where,
 * a fourth takes the row anew. A tap on another row starts there.
 */
export function afterTap(rows: readonly StripRow[], choice: StripChoice | null, { tap, vinesPerPanel }: { tap: StripTap; vinesPerPanel: number | null }): StripChoice {
  const row = rows[tap.rowIndex]!;
  if (choice !== null && tap.extend && choice.rowIds.length > 0) {
    const anchor = rows.findIndex((one) => one.id === choice.rowIds[0]);
    return { ...choice, rowIds: idsBetween(rows, anchor, tap.rowIndex) };
  }
  if (choice === null || !choice.rowIds.includes(row.id)) return wholeRows([row.id]);
  const post = nearestPostM(row, tap.alongM, vinesPerPanel);
  if (choice.fromM === null) return { ...choice, fromM: post };
  if (choice.toM !== null) return wholeRows([row.id]);
  const [fromM, toM] = [Math.min(choice.fromM, post), Math.max(choice.fromM, post)];
  return fromM === toM ? { ...choice, fromM: null } : { ...choice, fromM, toM };
}

/** Ids from one row to another, in either direction; the first one stays first, so that it can be extended again. */
export function idsBetween(rows: readonly StripRow[], from: number, to: number): string[] {
  const step = to < from ? -1 : 1;
  return Array.from({ length: Math.abs(to - from) + 1 }, (_, index) => rows[from + index * step]!.id);
}

export type StripMove = 'up' | 'down' | 'left' | 'right' | 'start' | 'end';

/** Vine that a key moves to: rows keep the place along the row, vines step by one or by a panel. */
export function movedVine(rows: readonly StripRow[], here: StripVine, { move, step }: { move: StripMove; step: number }): StripVine {
  const index = Math.max(0, rows.findIndex((row) => row.id === here.rowId));
  const row = rows[index]!;
  if (move === 'start') return { rowId: row.id, vine: 1 };
  if (move === 'end') return { rowId: row.id, vine: Math.max(1, row.vineCount) };
  if (move === 'left' || move === 'right') {
    const vine = here.vine + (move === 'left' ? -step : step);
    return { rowId: row.id, vine: Math.min(Math.max(1, row.vineCount), Math.max(1, vine)) };
  }
  const next = rows[Math.min(rows.length - 1, Math.max(0, index + (move === 'up' ? -1 : 1)))]!;
  return { rowId: next.id, vine: vineAtM(next, vineM(row, here.vine)) };
}

/** Choice between two vines reached with Shift: the rows between, and along them the places between when they differ. Who moved along a row means vines, be it one. */
export function choiceBetween(rows: readonly StripRow[], anchor: StripVine, { here, move }: { here: StripVine; move: StripMove }): StripChoice {
  const indexOf = (vine: StripVine) => rows.findIndex((row) => row.id === vine.rowId);
  const rowIds = idsBetween(rows, indexOf(anchor), indexOf(here));
  const [from, to] = [rows[indexOf(anchor)]!, rows[indexOf(here)]!];
  // Straight down the rows the place on the ground is the same, whatever its number there.
  const isOneVine = rowIds.length === 1 && move !== 'up' && move !== 'down';
  if (!isOneVine && vineAtM(from, vineM(to, here.vine)) === anchor.vine) return wholeRows(rowIds);
  const edges = [anchor, here].flatMap((vine) => {
    const row = rows[indexOf(vine)]!;
    return [vineEdgeM(row, vine.vine), vineEdgeM(row, vine.vine + 1)];
  });
  return { rowIds, fromM: Math.min(...edges), toM: Math.max(...edges) };
}
