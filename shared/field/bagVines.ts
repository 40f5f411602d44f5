import type { FieldRound } from '../contracts/rounds.ts';
import { vineAt, type WalkEntry } from './walkState.ts';

export interface BagVine {
  readonly rowId: string;
  readonly ordinal: number;
}

/**
 * Vines whose fruit is in the bag of a zone that is about to be closed: those of the zone that are sampled for the lab, were
 * picked or read with this phone, and are in no bag of the round yet. A reserve stands for its target.
 */
export function vinesForBag(round: Pick<FieldRound, 'stops' | 'measures'>, zone: number, known: { entries: readonly WalkEntry[]; inBags: readonly BagVine[] }): BagVine[] {
  const lab = round.measures.filter(({ measuredIn }) => measuredIn === 'lab').map(({ code }) => code);
  return round.stops.flatMap((stop) => {
    const isSampled = stop.zone === zone && stop.measures.some((code) => lab.includes(code)) && known.entries.some(({ targetId }) => targetId === stop.targetId);
    const vine = isSampled ? vineAt(stop, known.entries) : null;
    const isBagged = vine !== null && known.inBags.some(({ rowId, ordinal }) => rowId === vine.rowId && ordinal === vine.ordinal);
    return vine === null || isBagged ? [] : [{ rowId: vine.rowId, ordinal: vine.ordinal }];
  });
}
