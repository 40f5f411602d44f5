import type { FieldRow } from '../../../shared/contracts/rounds.ts';
import type { DrawnTarget } from '../../../shared/contracts/plans.ts';
import type { BlockRowView } from '../../../shared/contracts/rows.ts';
import type { StripRow, StripTarget, StripVine } from '../rowstrip/rowStripTypes.ts';

interface Posts {
  readonly start: string | null;
  readonly end: string | null;
}

/** Place of a vine counted from 1 at the start end of its row, as strips count. */
export function placeInRow(row: { readonly pieces: readonly { readonly firstVine: number }[] } | { readonly firstOrdinal: number }, ordinal: number): number {
  const first = 'firstOrdinal' in row ? row.firstOrdinal : (row.pieces[0]?.firstVine ?? 1);
  return ordinal - first + 1;
}

/** Rows of a block for the strip, zones taken from the runs of the round or plan. */
export function stripRows(rows: readonly BlockRowView[], runs: ReadonlyMap<string, FieldRow['runs']>, posts: Posts): StripRow[] {
  const offsets = startOffsets(rows);
  return rows.map((row, index) => {
    const known = (state: string) => row.vines.filter((vine) => vine.state === state && !vine.proposed).map(({ ordinal }) => placeInRow(row, ordinal));
    return {
      id: row.id,
      label: row.label,
      startOffsetM: offsets[index]!,
      lengthM: row.pieces.reduce((sum, piece) => sum + piece.lengthM, 0),
      vineCount: row.vineCount,
      startPost: posts.start,
      endPost: posts.end,
      zoneRuns: (runs.get(row.id) ?? []).map(({ zone, from, to }) => ({ zone, from: placeInRow(row, from), to: placeInRow(row, to) })),
      missing: [...known('missing'), ...known('dead')],
      replant: known('replant'),
      offType: known('offType'),
    };
  });
}

/** Where each row begins along the row direction, the least at 0: from its first post, in metres on a local flat earth. */
function startOffsets(rows: readonly BlockRowView[]): number[] {
  const first = rows[0]?.pieces[0];
  if (!first) return rows.map(() => 0);
  const metres = ([lon, lat]: readonly [number, number]) => [lon * 111_320 * Math.cos((first.from[1] * Math.PI) / 180), lat * 110_540] as const;
  const [fromX, fromY] = metres(first.from);
  const [toX, toY] = metres(first.to);
  const length = Math.hypot(toX - fromX, toY - fromY) || 1;
  const along = rows.map((row) => {
    const [x, y] = metres(row.pieces[0]?.from ?? first.from);
    return ((x - fromX) * (toX - fromX) + (y - fromY) * (toY - fromY)) / length;
  });
  const least = Math.min(...along);
  return along.map((value) => value - least);
}

export function stripTargets(targets: readonly DrawnTarget[], rows: readonly BlockRowView[]): StripTarget[] {
  const rowOf = new Map(rows.map((row) => [row.id, row]));
  return targets.flatMap(({ rowId, ordinal, walkOrder }) => {
    const row = rowOf.get(rowId);
    return row ? [{ rowId, vine: placeInRow(row, ordinal), ...(walkOrder === null ? {} : { order: walkOrder }) }] : [];
  });
}

export function stripReserves(targets: readonly DrawnTarget[], rows: readonly BlockRowView[]): StripVine[] {
  const rowOf = new Map(rows.map((row) => [row.id, row]));
  return targets.flatMap(({ reserve }) => {
    const row = reserve ? rowOf.get(reserve.rowId) : undefined;
    return row && reserve ? [{ rowId: reserve.rowId, vine: placeInRow(row, reserve.ordinal) }] : [];
  });
}
