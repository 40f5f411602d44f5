/** What is to be said of the advised number of zones beside the others. In: the advised number, those to offer, the evidence. Out: notes in order, for screen and paper to word. */

import { STABLE_FROM } from './clusterHold.ts';

export interface NumberNote {
  /** Doubtful: the advised number's weakest zone. Unsteady: stands out more, yet a zone of it cannot be trusted. Steadier: stable where the advised is not. Close: nearly as good. */
  readonly code: 'doubtful' | 'unsteady' | 'steadier' | 'close';
  readonly k: number;
  /** How well the weakest zone of this number comes back, 0…1, and that of the advised one. */
  readonly holds: number;
  readonly ownHolds: number;
}

export interface NumberEvidence {
  readonly k: number;
  readonly score: number | null;
  readonly holds: number | null;
}

/** Nothing for one zone, or where nothing is known of how zones hold and no other number is close. */
export function numberNotes(advised: number | null, alsoOffer: readonly number[], evidence: readonly NumberEvidence[]): NumberNote[] {
  const own = evidence.find(({ k }) => k === advised);
  if (!own || own.k < 2) return [];
  const ownHolds = own.holds ?? 1;
  const isDoubtful = ownHolds < STABLE_FROM;
  const others = evidence.filter(({ k }) => alsoOffer.includes(k)).map(({ k, score, holds }): NumberNote => {
    const isSteadier = isDoubtful && (holds ?? 0) >= STABLE_FROM;
    const code = (score ?? 0) > (own.score ?? 0) ? 'unsteady' : isSteadier ? 'steadier' : 'close';
    return { code, k, holds: holds ?? 1, ownHolds };
  });
  return isDoubtful ? [{ code: 'doubtful', k: own.k, holds: ownHolds, ownHolds }, ...others] : others;
}
