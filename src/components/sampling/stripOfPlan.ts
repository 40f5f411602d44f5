import type { FieldRow } from '../../../shared/contracts/rounds.ts';
import type { DrawnTarget } from '../../../shared/contracts/plans.ts';
import type { BlockRowView, Numbering } from '../../../shared/contracts/rows.ts';
import type { StripRow, StripTarget, StripVine } from '../rowstrip/rowStripTypes.ts';

interface Posts {
  readonly start: string | null;
  readonly end: string | null;
}

/** From which corner people count in a block. */
export type Counting = Pick<Numbering, 'rowOneSide' | 'vineOneEnd'>;
type End = Counting['vineOneEnd'];
type PlainRow = Pick<BlockRowView, 'vineCount'> & { readonly pieces: readonly { readonly firstVine: number }[] };

/** Number of a vine as people count it, from 1 at the end where they begin: what the post says. */
function placeInRow(row: PlainRow, ordinal: number, vineOneEnd: End): number {
  const place = ordinal - firstOrdinal(row) + 1;
  return vineOneEnd === 'start' ? place : row.vineCount + 1 - place;
}

/** Inverse of `placeInRow`. */
export function ordinalAt(row: PlainRow, place: number, vineOneEnd: End): number {
  return firstOrdinal(row) + (vineOneEnd === 'start' ? place : row.vineCount + 1 - place) - 1;
}

/** A run of ordinals as people count it. */
export function runInRow(row: PlainRow, { from, to }: { readonly from: number; readonly to: number }, vineOneEnd: End): { from: number; to: number } {
  const ends = [from, to].map((ordinal) => placeInRow(row, ordinal, vineOneEnd));
  return { from: Math.min(...ends), to: Math.max(...ends) };
}

/** Rows of a block for the strip as people count them, row 1 on top and vine 1 at the left; zones from the runs of the round or plan. */
export function stripRows(rows: readonly BlockRowView[], runs: ReadonlyMap<string, FieldRow['runs']>, { posts, counting: { rowOneSide, vineOneEnd } }: { posts: Posts; counting: Counting }): StripRow[] {
  const offsets = startOffsets(rows, vineOneEnd);
  const [startPost, endPost] = vineOneEnd === 'start' ? [posts.start, posts.end] : [posts.end, posts.start];
  const drawn = rows.map((row, index) => {
    const known = (state: string) => row.vines.filter((vine) => vine.state === state && !vine.proposed).map(({ ordinal }) => placeInRow(row, ordinal, vineOneEnd));
    return {
      id: row.id,
      label: row.label,
      startOffsetM: offsets[index]!,
      lengthM: lengthOf(row),
      vineCount: row.vineCount,
      startPost,
      endPost,
      zoneRuns: (runs.get(row.id) ?? []).map(({ zone, ...run }) => ({ zone, ...runInRow(row, run, vineOneEnd) })).sort((a, b) => a.from - b.from),
      missing: [...known('missing'), ...known('dead')],
      replant: known('replant'),
      offType: known('offType'),
    };
  });
  return rowOneSide === 'high' ? drawn.reverse() : drawn;
}

function firstOrdinal(row: PlainRow): number {
  return row.pieces[0]?.firstVine ?? 1;
}

function lengthOf(row: BlockRowView): number {
  return row.pieces.reduce((sum, piece) => sum + piece.lengthM, 0);
}

/** Where each row begins along the row direction, seen from the end where people begin, the least at 0: in metres on a local flat earth. */
function startOffsets(rows: readonly BlockRowView[], vineOneEnd: End): number[] {
  const first = rows[0]?.pieces[0];
  if (!first) return rows.map(() => 0);
  const metres = ([lon, lat]: readonly [number, number]) => [lon * 111_320 * Math.cos((first.from[1] * Math.PI) / 180), lat * 110_540] as const;
  const [fromX, fromY] = metres(first.from);
  const [toX, toY] = metres(first.to);
  const length = Math.hypot(toX - fromX, toY - fromY) || 1;
  const along = rows.map((row) => {
    const [x, y] = metres(row.pieces[0]?.from ?? first.from);
    const start = ((x - fromX) * (toX - fromX) + (y - fromY) * (toY - fromY)) / length;
    return vineOneEnd === 'start' ? start : -(start + lengthOf(row));
  });
  const least = Math.min(...along);
  return along.map((value) => value - least);
}

export function stripTargets(targets: readonly DrawnTarget[], rows: readonly BlockRowView[], vineOneEnd: End): StripTarget[] {
  const rowOf = new Map(rows.map((row) => [row.id, row]));
  return targets.flatMap(({ rowId, ordinal, walkOrder }) => {
    const row = rowOf.get(rowId);
    return row ? [{ rowId, vine: placeInRow(row, ordinal, vineOneEnd), ...(walkOrder === null ? {} : { order: walkOrder }) }] : [];
  });
}

export function stripReserves(targets: readonly DrawnTarget[], rows: readonly BlockRowView[], vineOneEnd: End): StripVine[] {
  const rowOf = new Map(rows.map((row) => [row.id, row]));
  return targets.flatMap(({ reserve }) => {
    const row = reserve ? rowOf.get(reserve.rowId) : undefined;
    return row && reserve ? [{ rowId: reserve.rowId, vine: placeInRow(row, reserve.ordinal, vineOneEnd) }] : [];
  });
}
