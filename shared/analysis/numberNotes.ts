/** What is to be said of the advised number of zones beside the others. In: the advised number, those to offer, the evidence. Out: notes in order, for screen and paper to word. */

import { isSteadier, STABLE_FROM, type Steadiness } from './clusterHold.ts';
import { LEAST_GAIN } from './zoneCount.ts';

export interface NumberNote {
  /**
   * Doubtful: the advised number's weakest zone. Of another number, unsteady: it stands out more, yet its weakest zone is
   * doubtful. Enough: it stands out more, but the advised one leaves so little within its zones that one more can
   * add nothing. Middle: it stands out more, but the advised one lies in the middle of what chance does not tell apart. Holds: it is nearly as good and its weakest zone comes back better. Agrees: it is found again much more surely
   * from half of the cells. Close: it is nearly as good.
   */
  readonly code: 'doubtful' | 'unsteady' | 'enough' | 'middle' | 'holds' | 'agrees' | 'close';
  readonly k: number;
  /** The share the note is about, 0…1, and that of the advised number. */
  readonly share: number;
  readonly ownShare: number;
}

export interface NumberEvidence extends Steadiness {
  readonly k: number;
  readonly score: number | null;
  /** Null for runs of before. */
  readonly calmWithin: number | null;
}

/** The weakest zone comes back better by this (judgement). */
const BETTER = 0.05;

/** Nothing for one zone, or where no other number is worth a look. */
export function numberNotes(advised: number | null, alsoOffer: readonly number[], evidence: readonly NumberEvidence[]): NumberNote[] {
  const own = evidence.find(({ k }) => k === advised);
  if (!own || own.k < 2) return [];
  const [ownHolds, ownStability] = [own.holds ?? 1, own.stability ?? 1];
  const others = evidence.filter(({ k }) => alsoOffer.includes(k)).map((row): NumberNote => {
    const [holds, stability] = [row.holds ?? 1, row.stability ?? 1];
    const byHold = { k: row.k, share: holds, ownShare: ownHolds };
    if ((row.score ?? 0) > (own.score ?? 0)) {
      if (row.k > own.k && own.calmWithin !== null && own.calmWithin <= LEAST_GAIN) return { code: 'enough', k: row.k, share: row.calmWithin ?? 0, ownShare: own.calmWithin };
      return { code: holds < STABLE_FROM ? 'unsteady' : 'middle', ...byHold };
    }
    if (holds - ownHolds >= BETTER) return { code: 'holds', ...byHold };
    return isSteadier(row, own) ? { code: 'agrees', k: row.k, share: stability, ownShare: ownStability } : { code: 'close', ...byHold };
  });
  return ownHolds < STABLE_FROM ? [{ code: 'doubtful', k: own.k, share: ownHolds, ownShare: ownHolds }, ...others] : others;
}
