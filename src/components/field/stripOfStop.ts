import type { FieldRound, FieldRow, WalkStop } from '../../../shared/contracts/rounds.ts';
import { roughPlace, type PhonePlace } from '../../../shared/field/roughPlace.ts';
import type { StopVine } from '../../../shared/field/walkState.ts';
import type { StripRow } from '../rowstrip/rowStripTypes.ts';

export interface StopStrip {
  readonly row: StripRow;
  readonly target: number;
  readonly reserve: number | null;
  readonly here: number | null;
  readonly fromEnd: 'start' | 'end';
  /** The phone's rough place in the same numbers; null where it is not told or does not reach the row. */
  readonly rough: { readonly centre: number; readonly radius: number } | null;
  /** Metres from the circle to the row; null where no place is told. */
  readonly awayM: number | null;
}

/** The row of a stop in the numbers that people count by: from the vine-1 end, whichever end of the row that is. */
export function stripOfStop({ round, stop, vine, previous, place = null }: { round: FieldRound; stop: WalkStop; vine: StopVine; previous: StopVine | null; place?: PhonePlace | null }): StopStrip | null {
  const row = round.rows.find(({ id }) => id === vine.rowId);
  if (!row) return null;
  const isFlipped = round.vineOneEnd === 'end';
  const number = (ordinal: number) => (isFlipped ? row.firstOrdinal + row.vineCount - ordinal : ordinal - row.firstOrdinal + 1);
  const near = place === null ? null : roughPlace(row, place);
  const wasHere = previous !== null && previous.rowId === vine.rowId && stop.aheadFrom === 'lastVine';
  return {
    row: { ...stripRow(row, number), startPost: isFlipped ? round.endPostColour : round.startPostColour, endPost: isFlipped ? round.startPostColour : round.endPostColour },
    target: vine.vineNumber,
    reserve: !vine.isReserve && stop.reserve?.rowId === vine.rowId ? stop.reserve.vineNumber : null,
    here: wasHere ? previous.vineNumber : null,
    fromEnd: (stop.heading === 'toEnd') === isFlipped ? 'end' : 'start',
    rough: near !== null && near.awayM === 0 ? { centre: number(near.centre), radius: near.radius } : null,
    awayM: near?.awayM ?? null,
  };
}

function stripRow(row: FieldRow, number: (ordinal: number) => number): Omit<StripRow, 'startPost' | 'endPost'> {
  const known = (states: readonly string[]) => row.known.filter(({ state }) => states.includes(state)).map(({ ordinal }) => number(ordinal)).sort((a, b) => a - b);
  const runs = row.runs.map(({ zone, from, to }) => ({ zone, from: Math.min(number(from), number(to)), to: Math.max(number(from), number(to)) }));
  return {
    id: row.id, label: row.label, startOffsetM: 0, lengthM: row.vineCount, vineCount: row.vineCount,
    zoneRuns: runs.sort((a, b) => a.from - b.from), missing: known(['missing', 'dead']), replant: known(['replant']), offType: known(['offType']),
  };
}
