import type { XY } from './coordinates.ts';
import { type RowFrame, toAlongAcross } from './rowFrame.ts';
import type { PieceXY, RowsXY, RowXY } from './rowsLayout.ts';

/**
 * Where vines stand. A vine is (row, ordinal from the row's start end); positions follow from the row's pieces and are
 * never stored. The table holds all of a block at once, for labelling, drawing targets and painting: vines in order of
 * row, then ordinal, so that a row and a piece are ranges of it.
 */
export interface VineTable {
  readonly count: number;
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Index into `rows` (not the row's ordinal). */
  readonly row: Int32Array;
  readonly ordinal: Int32Array;
  /** Vines of row r are rowStart[r] up to, not with, rowStart[r + 1]. */
  readonly rowStart: Int32Array;
  /** The same for the pieces of all rows, in order. */
  readonly pieceStart: Int32Array;
}

/** Positions of all vines; 15 000 vines take some milliseconds. */
export function vineTable({ rows }: RowsXY): VineTable {
  const count = rows.reduce((sum, row) => sum + row.vineCount, 0);
  const x = new Float64Array(count);
  const y = new Float64Array(count);
  const rowOf = new Int32Array(count);
  const ordinal = new Int32Array(count);
  const rowStart = new Int32Array(rows.length + 1);
  const pieceStart: number[] = [];
  let vine = 0;
  rows.forEach((row, rowIndex) => {
    rowStart[rowIndex] = vine;
    for (const piece of row.pieces) {
      pieceStart.push(vine);
      for (let k = 0; k < piece.vineCount; k++) {
        const [vineX, vineY] = pointOnPiece(piece, piece.firstVineM + k * piece.stepM);
        x[vine] = vineX;
        y[vine] = vineY;
        rowOf[vine] = rowIndex;
        ordinal[vine] = piece.firstVine + k;
        vine++;
      }
    }
  });
  rowStart[rows.length] = vine;
  return { count, x, y, row: rowOf, ordinal, rowStart, pieceStart: Int32Array.from([...pieceStart, vine]) };
}

/** Index of a vine in the table, or -1 when the row has no such vine. */
export function vineIndex(table: VineTable, rowIndex: number, ordinal: number): number {
  const start = table.rowStart[rowIndex];
  const end = table.rowStart[rowIndex + 1];
  if (start === undefined || end === undefined || start === end) return -1;
  const index = start + ordinal - table.ordinal[start]!;
  return index >= start && index < end ? index : -1;
}

/** Position of one vine without a table, or null when the row has no such vine. */
export function vineXY(row: RowXY, ordinal: number): XY | null {
  const piece = row.pieces.find(({ firstVine, vineCount }) => ordinal >= firstVine && ordinal < firstVine + vineCount);
  return piece === undefined ? null : pointOnPiece(piece, piece.firstVineM + (ordinal - piece.firstVine) * piece.stepM);
}

/** Ordinal of a row's first vine; 1 unless the row was lengthened at its start end later. */
export function firstOrdinal(row: RowXY): number {
  return row.pieces[0]?.firstVine ?? 1;
}

/** Positions along the row frame (t) of a row's vines, in order of ordinal. */
export function vinesAlong(frame: RowFrame, row: RowXY): number[] {
  return row.pieces.flatMap((piece) =>
    Array.from({ length: piece.vineCount }, (_, k) => toAlongAcross(frame, pointOnPiece(piece, piece.firstVineM + k * piece.stepM)).t));
}

/** The point `distanceM` along a piece from its start end, round its bends. */
export function pointOnPiece(piece: PieceXY, distanceM: number): XY {
  if (piece.bendsXY.length === 0) return between(piece.fromXY, piece.toXY, distanceM / piece.lengthM);
  let left = distanceM;
  let from = piece.fromXY;
  for (const to of [...piece.bendsXY, piece.toXY]) {
    const length = Math.hypot(to[0] - from[0], to[1] - from[1]);
    if (left <= length || to === piece.toXY) return between(from, to, length === 0 ? 0 : left / length);
    left -= length;
    from = to;
  }
  return piece.toXY;
}

/** The line along a piece from one distance from its start end to another, with the bends between them. */
export function pathOnPiece(piece: PieceXY, fromM: number, toM: number): XY[] {
  let reached = 0;
  let last = piece.fromXY;
  const between = piece.bendsXY.filter((bend) => {
    reached += Math.hypot(bend[0] - last[0], bend[1] - last[1]);
    last = bend;
    return reached > fromM && reached < toM;
  });
  return [pointOnPiece(piece, fromM), ...between, pointOnPiece(piece, toM)];
}

function between(from: XY, to: XY, share: number): XY {
  return [from[0] + (to[0] - from[0]) * share, from[1] + (to[1] - from[1]) * share];
}
