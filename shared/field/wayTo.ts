import type { FieldRow, WalkStop } from '../contracts/rounds.ts';
import type { StopVine } from './walkState.ts';

/** How a stop is reached: from the vine before, in this row or across the alley, or from a post at the row's end. */
export interface WayTo {
  readonly from: 'vineInRow' | 'vineAcross' | 'post';
  /** Whether the row is entered at its start end, or walked from there. */
  readonly fromStart: boolean;
  /** Vines of the stop's row from there, the stop counted: 0 is beside the walker. */
  readonly ahead: number;
}

/**
 * The way to a stop for somebody who comes from `previous`. The walk counts from the vine before; whoever has not stood
 * there, because the walk was taken over or somebody else read that vine, counts from the post.
 */
export function wayTo(rows: readonly Pick<FieldRow, 'id' | 'firstOrdinal' | 'vineCount'>[], stop: WalkStop, previous: StopVine | null): WayTo {
  const fromStart = stop.enterBy === 'start' || (stop.enterBy !== 'end' && stop.heading === 'toEnd');
  if (stop.aheadFrom === 'entry') return { from: 'post', fromStart, ahead: stop.ahead };
  if (previous !== null) return { from: previous.rowId === stop.rowId ? 'vineInRow' : 'vineAcross', fromStart, ahead: stop.ahead };
  const row = rows.find(({ id }) => id === stop.rowId);
  if (!row) return { from: 'post', fromStart, ahead: stop.ahead };
  return { from: 'post', fromStart, ahead: fromStart ? stop.ordinal - row.firstOrdinal + 1 : row.firstOrdinal + row.vineCount - stop.ordinal };
}
