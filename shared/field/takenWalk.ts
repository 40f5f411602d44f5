import type { FieldRound, WalkStop } from '../contracts/rounds.ts';
import { askedAt } from './walkState.ts';

/**
 * Somebody else's walk on this phone: theirs taken over, or theirs on a borrowed phone. What the server knew as read is left
 * out, a vine with all that is asked of it, and so are those before `fromTargetId`, where the walker says how far it had
 * come. Null when the phone does not hold that walk.
 */
export function takenWalk(round: FieldRound, walkerId: string, fromTargetId: string | null): FieldRound | null {
  const walk = round.others.find(({ id }) => id === walkerId);
  if (!walk) return null;
  const from = Math.max(0, walk.stops.findIndex(({ targetId }) => targetId === fromTargetId));
  const stops = walk.stops.flatMap((stop, place) => (place >= from ? leftAt(round, stop) : []));
  return { ...round, stops, received: [] };
}

/** The stop with what is still asked there, or nothing. A round of older times tells only at which vines something was read. */
function leftAt(round: FieldRound, stop: WalkStop): WalkStop[] {
  if (round.readAsks === undefined) return round.doneTargetIds.includes(stop.targetId) ? [] : [stop];
  const isRead = (code: string) => round.readAsks!.some(({ targetId, measureCode }) => targetId === stop.targetId && measureCode === code);
  if (askedAt(round, stop).every(({ code }) => isRead(code))) return [];
  return [{ ...stop, measures: stop.measures.filter((code) => !isRead(code)) }];
}
