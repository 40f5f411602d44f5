/**
 * How many zones? Of the numbers whose every zone can be trusted, the one where the zones are best separated on the calm cells and at
 * the same time furthest beyond what random fields of the same smoothness show: the largest ln(Calinski–Harabasz) + gap. With
 * one layer the gap alone, because Calinski–Harabasz keeps growing with k there. A zone can be trusted when it comes back
 * from ground drawn anew (see clusterHold): scores of neighbouring numbers often differ by less than chance, and a zone that is there or
 * not by which ground was looked at cannot be worked. Where no number can be trusted, all are weighed. Readings of fruit do not choose
 * the number: they moved no choice for the better in simulation.
 * Sources: Calinski & Harabasz 1974; Tibshirani, Walther & Hastie 2001; Hennig 2007; see verdictGap and clusterHold.
 */

import { isSteadier, TRUSTED_FROM } from './clusterHold.ts';
import type { GapAtK } from './verdictGap.ts';

export interface ZoneCountAdvice {
  /** Best number of zones from 2 to 6; whether more than one is worth it is for the verdict to say. */
  readonly best: number;
  /** Numbers that deserve a look beside it: those with nearly its score, steadier neighbours, and the highest score of all where a zone of it cannot be trusted. */
  readonly alsoOffer: readonly number[];
  readonly scores: readonly { readonly k: number; readonly score: number }[];
}

const CLOSE_SCORE = 0.1;

export interface ZoneCountInput {
  readonly curve: readonly GapAtK[];
  readonly layerCount: number;
  /** Numbers whose zones are all still there after clean-up; a zone without a patch large enough to work is no zone. */
  readonly workable: readonly number[];
  /** Agreement of fits on halves by number of zones, where it is known. */
  readonly stability?: ReadonlyMap<number, number | null>;
}

/** A tie goes to the smaller number: fewer zones are less work in the field. */
export function adviseZoneCount({ curve, layerCount, workable, stability }: ZoneCountInput): ZoneCountAdvice {
  const rows = curve.map(({ k, gap, separation, holds }) => ({ k, holds, stability: stability?.get(k) ?? null, score: layerCount === 1 ? gap : Math.log(separation) + gap }));
  const scores = rows.map(({ k, score }) => ({ k, score }));
  const choice = rows.filter(({ k }) => workable.includes(k));
  if (choice.length === 0) return { best: workable[0] ?? 2, alsoOffer: [], scores };
  const trusted = choice.filter(({ holds }) => holds >= TRUSTED_FROM);
  const best = highest(trusted.length > 0 ? trusted : choice);
  const close = choice.filter((row) => row !== best && row.score <= best.score && best.score - row.score <= CLOSE_SCORE && row.holds >= TRUSTED_FROM);
  const steadier = choice.filter((row) => Math.abs(row.k - best.k) === 1 && isSteadier(row, best));
  const unsteady = [highest(choice)].filter((row) => row !== best);
  return { best: best.k, alsoOffer: [...new Set([...close, ...steadier, ...unsteady].map(({ k }) => k))].sort((a, b) => a - b), scores };
}

function highest<Row extends { readonly score: number }>(rows: readonly Row[]): Row {
  return rows.reduce((most, row) => (row.score > most.score ? row : most));
}
