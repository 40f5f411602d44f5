import type { XY } from './coordinates.ts';
import { type RowFrame, toAlongAcross } from './rowFrame.ts';
import type { RowsXY, RowXY } from './rowsLayout.ts';
import { firstOrdinal } from './vines.ts';

/**
 * Numbers as people in the block read them. Identities (row id, vine ordinal) never move; labels are made from them.
 * Stored as sides of the row frame, so a bearing typed as 210 numbers a block as 30 does.
 */
export interface NumberingCorner {
  /** Row 1 is the row with the lowest or the highest s. */
  readonly rowOneSide: 'low' | 'high';
  /** Vine 1 stands at the start (low t) or the far end of its row. */
  readonly vineOneEnd: 'start' | 'end';
}

/** The corner meant by a tap near one of the four outermost row ends; null when the block has no rows. */
export function numberingFromTap({ frame, rows }: RowsXY, tapXY: XY): NumberingCorner | null {
  const first = rows[0];
  const last = rows.at(-1);
  if (first === undefined || last === undefined) return null;
  const tap = toAlongAcross(frame, tapXY);
  const rowOneSide = Math.abs(tap.s - first.s) <= Math.abs(last.s - tap.s) ? 'low' : 'high';
  const [startT, endT] = rowEndsAlong(frame, rowOneSide === 'low' ? first : last);
  const vineOneEnd = Math.abs(tap.t - startT) <= Math.abs(endT - tap.t) ? 'start' : 'end';
  return { rowOneSide, vineOneEnd };
}

/** t of a row's two outer ends. */
function rowEndsAlong(frame: RowFrame, row: RowXY): readonly [startT: number, endT: number] {
  return [toAlongAcross(frame, row.pieces[0]!.fromXY).t, toAlongAcross(frame, row.pieces.at(-1)!.toXY).t];
}

/** Label of each row, by its index in order of s. Example: 24 rows, high side: row index 10 gets 14. */
export function rowLabels(rowCount: number, rowOneSide: NumberingCorner['rowOneSide'], firstLabel = 1): number[] {
  return Array.from({ length: rowCount }, (_, i) => firstLabel + (rowOneSide === 'low' ? i : rowCount - 1 - i));
}

/** Number of a vine as counted from the vine-1 end of its row. */
export function vineLabel(row: RowXY, ordinal: number, vineOneEnd: NumberingCorner['vineOneEnd']): number {
  const place = ordinal - firstOrdinal(row) + 1;
  return vineOneEnd === 'start' ? place : row.vineCount + 1 - place;
}

/** Inverse of `vineLabel`; null when the row has no vine of that number. */
export function vineOrdinal(row: RowXY, label: number, vineOneEnd: NumberingCorner['vineOneEnd']): number | null {
  if (!Number.isInteger(label) || label < 1 || label > row.vineCount) return null;
  const place = vineOneEnd === 'start' ? label : row.vineCount + 1 - label;
  return place + firstOrdinal(row) - 1;
}

export interface RowLabelChange {
  readonly rowId: string;
  readonly label: string;
  /** The label before, when it differs: sheets print "14 (was 11)". */
  readonly was: string | null;
}

/** New labels for rows given in order of s; ids, and so everything measured on them, stay where they are. */
export function renumberRows(
  rows: readonly { readonly rowId: string; readonly label: string }[],
  rowOneSide: NumberingCorner['rowOneSide'],
  firstLabel = 1,
): RowLabelChange[] {
  const labels = rowLabels(rows.length, rowOneSide, firstLabel);
  return rows.map(({ rowId, label }, i) => {
    const next = String(labels[i]!);
    return { rowId, label: next, was: next === label ? null : label };
  });
}
