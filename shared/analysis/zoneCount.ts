/**
 * How many zones? Each number from 2 to 6 is scored by how well its zones are separated on the calm cells and how far they are beyond
 * what random fields of the same smoothness show: ln(Calinski–Harabasz) + gap; with one layer the gap alone, because
 * Calinski–Harabasz keeps growing with k there. Scores of neighbouring numbers often differ by less than chance, so the highest is
 * not simply taken. Every number has a weight, exp(score / d), where d is what two scores differ by through chance alone (√2 times
 * the spread of the gap among the random fields), times the square of how surely its weakest zone comes back from ground drawn anew;
 * the advice is the median of the numbers under these weights, the choice that is off by the least on average. A number
 * with a zone that dissolves when ground is drawn anew is none, unless all do, and none is above the first that leaves less than five
 * points of the variance: one more could not add what makes a zone worth having (Dobermann et al. 2003 stop where the share explained
 * levels off; five points are common practice), and among cuts of what little is left the median would wander upwards.
 * Readings of fruit do not choose the number: they moved no choice for the better in simulation.
 * Sources: Calinski & Harabasz 1974; Tibshirani, Walther & Hastie 2001; Hennig 2007 (see verdictGap and clusterHold); weights of rivals by
 * their scores as in Burnham & Anderson 2002, the median as the estimator under absolute loss as in Berger 1985 (from memory). The
 * square is our own judgement: powers 1 to 3 did alike on development blocks.
 */

import { DISSOLVED_BELOW, isSteadier, TRUSTED_FROM } from './clusterHold.ts';
import type { GapAtK } from './verdictGap.ts';

export interface ZoneCountAdvice {
  /** Best number of zones from 2 to 6; whether more than one is worth it is for the verdict to say. */
  readonly best: number;
  /** Numbers that deserve a look beside it: those with nearly its score, steadier neighbours, and the highest score of all. */
  readonly alsoOffer: readonly number[];
  readonly scores: readonly { readonly k: number; readonly score: number }[];
}

const CLOSE_SCORE = 0.1;
/** Share of the variance on the calm cells that one more zone must be able to add. */
export const LEAST_GAIN = 0.05;
/** Fields that all agree would divide by nothing. */
const LEAST_CHANCE = 1e-6;

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
  const rows = curve.map(({ k, gap, gapSd, separation, holds, withinShare }) => ({ k, holds, withinShare, gapSd, stability: stability?.get(k) ?? null, score: layerCount === 1 ? gap : Math.log(separation) + gap }));
  const scores = rows.map(({ k, score }) => ({ k, score }));
  const choice = rows.filter(({ k }) => workable.includes(k));
  if (choice.length === 0) return { best: workable[0] ?? 2, alsoOffer: [], scores };
  const enough = choice.find(({ withinShare }) => withinShare <= LEAST_GAIN)?.k ?? Infinity;
  const few = choice.filter(({ k }) => k <= enough);
  const standing = few.filter(({ holds }) => holds >= DISSOLVED_BELOW);
  const best = middle(standing.length > 0 ? standing : few);
  const close = choice.filter((row) => row !== best && Math.abs(row.score - best.score) <= CLOSE_SCORE && row.holds >= TRUSTED_FROM);
  const steadier = choice.filter((row) => Math.abs(row.k - best.k) === 1 && isSteadier(row, best));
  const foremost = [highest(choice)].filter((row) => row !== best);
  return { best: best.k, alsoOffer: [...new Set([...close, ...steadier, ...foremost].map(({ k }) => k))].sort((a, b) => a - b), scores };
}

interface Weighed {
  readonly k: number;
  readonly score: number;
  readonly gapSd: number;
  readonly holds: number;
}

/** The median of the numbers, each weighing by its score in units of chance and by how its weakest zone holds. */
function middle<Row extends Weighed>(rows: readonly Row[]): Row {
  const byChance = Math.max(LEAST_CHANCE, (Math.SQRT2 * rows.reduce((sum, { gapSd }) => sum + gapSd, 0)) / rows.length);
  const { score: most } = highest(rows);
  const weights = rows.map(({ score, holds }) => Math.exp((score - most) / byChance) * holds ** 2);
  const half = weights.reduce((sum, weight) => sum + weight, 0) / 2;
  let below = 0;
  return rows.find((_, at) => (below += weights[at]!) >= half) ?? rows[0]!;
}

function highest<Row extends { readonly score: number }>(rows: readonly Row[]): Row {
  return rows.reduce((most, row) => (row.score > most.score ? row : most));
}
