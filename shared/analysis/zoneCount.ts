/**
 * How many zones? The number where the zones are best separated on the calm cells and at the same time furthest beyond what
 * random fields of the same smoothness show: the largest ln(Calinski–Harabasz) + gap. With one layer the gap alone, because
 * Calinski–Harabasz keeps growing with k there. Readings of fruit do not choose the number: they moved no choice for the
 * better in simulation. Sources: Calinski & Harabasz 1974; Tibshirani, Walther & Hastie 2001; see verdictGap.
 */

import type { GapAtK } from './verdictGap.ts';

export interface ZoneCountAdvice {
  /** Best number of zones from 2 to 6; whether more than one is worth it is for the verdict to say. */
  readonly best: number;
  /** Neighbouring numbers whose score is so close that they deserve a look. */
  readonly alsoOffer: readonly number[];
  readonly scores: readonly { readonly k: number; readonly score: number }[];
}

const CLOSE_SCORE = 0.1;

export interface ZoneCountInput {
  readonly curve: readonly GapAtK[];
  readonly layerCount: number;
  /** Numbers whose zones are all still there after clean-up; a zone without a patch large enough to work is no zone. */
  readonly workable: readonly number[];
}

/** A tie goes to the smaller number: fewer zones are less work in the field. */
export function adviseZoneCount({ curve, layerCount, workable }: ZoneCountInput): ZoneCountAdvice {
  const scores = curve.map(({ k, gap, separation }) => ({ k, score: layerCount === 1 ? gap : Math.log(separation) + gap }));
  const choice = scores.filter(({ k }) => workable.includes(k));
  if (choice.length === 0) return { best: workable[0] ?? 2, alsoOffer: [], scores };
  const best = choice.reduce((most, row) => (row.score > most.score ? row : most));
  const alsoOffer = choice.filter((row) => Math.abs(row.k - best.k) === 1 && best.score - row.score <= CLOSE_SCORE).map((row) => row.k);
  return { best: best.k, alsoOffer, scores };
}
