import { type RowFrame, toAlongAcross } from './rowFrame.ts';
import type { PieceXY, RowsXY, RowXY } from './rowsLayout.ts';
import { firstOrdinal, vinesAlong } from './vines.ts';

/**
 * Keeps identities when an outline or a spacing changes: which rebuilt row is which old row, and which vine which.
 * Rows: mutually nearest across the rows, less than half a spacing apart, and alongside each other for at least half
 * of the shorter one. Vines: mutually nearest along the row, less than half a vine spacing apart. Own rule.
 */

export interface KnownRow {
  readonly rowId: string;
  readonly row: RowXY;
}

export interface RowMatch {
  readonly rowId: string;
  /** Index into the rebuilt rows. */
  readonly rowIndex: number;
  /** Old ordinal of each rebuilt vine in order along the row, or null for a vine that was not there. */
  readonly oldOrdinals: readonly (number | null)[];
}

export interface RowMatches {
  readonly matches: readonly RowMatch[];
  /** Rebuilt rows that need a new id, by index. */
  readonly newRows: readonly number[];
  /** Old rows without a partner: retired when they have readings, never deleted. */
  readonly goneRowIds: readonly string[];
}

export interface MatchSpacing {
  readonly rowSpacingM: number;
  readonly vineSpacingM: number;
}

export function matchRows(known: readonly KnownRow[], rebuilt: RowsXY, spacing: MatchSpacing): RowMatches {
  const { frame, rows } = rebuilt;
  const oldS = known.map(({ row }) => middleAcross(frame, row));
  const newS = rows.map((row) => middleAcross(frame, row));
  const matches: RowMatch[] = [];
  mutuallyNearest(oldS, newS, spacing.rowSpacingM / 2).forEach((rowIndex, i) => {
    if (rowIndex === null) return;
    const { rowId, row } = known[i]!;
    if (sharedAlong(frame, row, rows[rowIndex]!) < 0.5) return;
    matches.push({ rowId, rowIndex, oldOrdinals: matchVines(frame, { old: row, rebuilt: rows[rowIndex]! }, spacing.vineSpacingM) });
  });
  const taken = new Set(matches.map((match) => match.rowIndex));
  const kept = new Set(matches.map((match) => match.rowId));
  return {
    matches,
    newRows: rows.map((_, index) => index).filter((index) => !taken.has(index)),
    goneRowIds: known.map(({ rowId }) => rowId).filter((rowId) => !kept.has(rowId)),
  };
}

/**
 * The rebuilt row with ordinals moved so that matched vines keep theirs; a row lengthened at its start end then begins
 * at 0 or below. `moved` lists old ordinals that this cannot keep (the spacing changed): their readings go by position.
 */
export function keepOrdinals<Piece extends PieceXY>(row: RowXY<Piece>, oldOrdinals: readonly (number | null)[]): { row: RowXY<Piece>; moved: number[] } {
  const first = firstOrdinal(row);
  const shifts = new Map<number, number>();
  oldOrdinals.forEach((old, place) => {
    if (old !== null) shifts.set(old - first - place, (shifts.get(old - first - place) ?? 0) + 1);
  });
  const shift = [...shifts].sort((a, b) => b[1] - a[1] || Math.abs(a[0]) - Math.abs(b[0]))[0]?.[0] ?? 0;
  const pieces = row.pieces.map((piece) => ({ ...piece, firstVine: piece.firstVine + shift }));
  const moved = oldOrdinals.flatMap((old, place) => (old !== null && old !== first + place + shift ? [old] : []));
  return { row: { ...row, pieces }, moved };
}

function matchVines(frame: RowFrame, pair: { old: RowXY; rebuilt: RowXY }, vineSpacingM: number): (number | null)[] {
  const first = firstOrdinal(pair.old);
  return mutuallyNearest(vinesAlong(frame, pair.rebuilt), vinesAlong(frame, pair.old), vineSpacingM / 2)
    .map((place) => (place === null ? null : first + place));
}

/** For each of `from` the index in `to` that is its nearest and whose nearest it is, closer than `withinM`. Ties: the lower index. */
function mutuallyNearest(from: readonly number[], to: readonly number[], withinM: number): (number | null)[] {
  const back = nearestEach(to, from);
  return nearestEach(from, to).map((there, here) =>
    there !== null && back[there] === here && Math.abs(to[there]! - from[here]!) < withinM ? there : null);
}

function nearestEach(from: readonly number[], to: readonly number[]): (number | null)[] {
  const sorted = to.map((value, index) => ({ value, index })).sort((a, b) => a.value - b.value || a.index - b.index);
  return from.map((value) => {
    let low = 0;
    let high = sorted.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (sorted[middle]!.value < value) low = middle + 1;
      else high = middle;
    }
    let best: { value: number; index: number } | null = null;
    for (const near of sorted.slice(Math.max(0, low - 1), low + 1)) {
      if (best === null || Math.abs(near.value - value) < Math.abs(best.value - value)) best = near;
    }
    return best === null ? null : best.index;
  });
}

/** Mean s of a row's pieces, weighted by length. */
function middleAcross(frame: RowFrame, row: RowXY): number {
  let sum = 0;
  let length = 0;
  for (const piece of row.pieces) {
    sum += (piece.lengthM * (toAlongAcross(frame, piece.fromXY).s + toAlongAcross(frame, piece.toXY).s)) / 2;
    length += piece.lengthM;
  }
  return sum / length;
}

/** Length over which two rows lie side by side, as a share of the shorter one. */
function sharedAlong(frame: RowFrame, a: RowXY, b: RowXY): number {
  let shared = 0;
  for (const [fromA, toA] of stretches(frame, a)) {
    for (const [fromB, toB] of stretches(frame, b)) shared += Math.max(0, Math.min(toA, toB) - Math.max(fromA, fromB));
  }
  const length = (row: RowXY): number => stretches(frame, row).reduce((sum, [from, to]) => sum + to - from, 0);
  return shared / Math.min(length(a), length(b));
}

function stretches(frame: RowFrame, row: RowXY): [from: number, to: number][] {
  return row.pieces.map((piece) => {
    const from = toAlongAcross(frame, piece.fromXY).t;
    const to = toAlongAcross(frame, piece.toXY).t;
    return [Math.min(from, to), Math.max(from, to)];
  });
}
