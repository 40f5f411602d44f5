import type { FieldRound } from '../contracts/rounds.ts';

/**
 * Somebody else's walk on this phone: theirs taken over, or theirs on a borrowed phone. Vines that the server knew as read
 * are left out, and so are those before `fromTargetId`, where the walker says how far it had come. Null when the phone does
 * not hold that walk.
 */
export function takenWalk(round: FieldRound, walkerId: string, fromTargetId: string | null): FieldRound | null {
  const walk = round.others.find(({ id }) => id === walkerId);
  if (!walk) return null;
  const from = Math.max(0, walk.stops.findIndex(({ targetId }) => targetId === fromTargetId));
  const stops = walk.stops.filter(({ targetId }, place) => place >= from && !round.doneTargetIds.includes(targetId));
  return { ...round, stops, received: [] };
}
