/**
 * Which ground keeps its place among the rest from season to season? Each season's cells are ranked 0 … 1, and every cell gets
 * the mean difference of its ranks over all pairs of seasons (temporal stability by ranks: Vachaud, Passerat de Silans,
 * Balabanis & Vauclin 1985, from memory). Two seasons that have nothing to do with each other differ by a third on average
 * (mean distance of two uniform numbers), so a third is as much as chance. In: cells of one kind of layer on one grid, one
 * array a season. Out: the difference per cell and three kinds of ground. Cost: a sort of the cells a season.
 */

import { averageRanks } from './agreement.ts';
import type { Cells, Labels } from './grid.ts';

const CHANCE_SHIFT = 1 / 3;
/** Half of what chance does. */
const STEADY_BELOW = CHANCE_SHIFT / 2;
const LEAST_CELLS = 30;

/** Labels of `ground`. */
const steadiness = { steady: 1, moving: 2, chance: 3 } as const;

export interface RankStability {
  readonly cells: number;
  /** Mean difference of ranks, 0 … 1 per cell; NaN where a season has no value. */
  readonly shift: Cells;
  readonly ground: Labels;
  readonly shares: { readonly steady: number; readonly moving: number; readonly chance: number };
}

/** Null with one season only, or fewer than 30 cells that all seasons have. The same season twice is steady everywhere. */
export function rankStability(seasons: readonly Cells[]): RankStability | null {
  const [first] = seasons;
  if (first === undefined || seasons.length < 2) return null;
  const common = Uint32Array.from(first.keys()).filter((cell) => seasons.every((cells) => !Number.isNaN(cells[cell]!)));
  if (common.length < LEAST_CELLS) return null;
  const ranks = seasons.map((cells) => averageRanks(Float64Array.from(common, (cell) => cells[cell]!)));
  const shift = new Float32Array(first.length).fill(NaN);
  const ground = new Uint8Array(first.length);
  const counts = [0, 0, 0, 0];
  for (let i = 0; i < common.length; i++) {
    const own = meanPairDifference(ranks.map((season) => (season[i]! - 0.5) / common.length));
    const label = own < STEADY_BELOW ? steadiness.steady : own < CHANCE_SHIFT ? steadiness.moving : steadiness.chance;
    shift[common[i]!] = own;
    ground[common[i]!] = label;
    counts[label]!++;
  }
  const share = (label: number) => counts[label]! / common.length;
  return { cells: common.length, shift, ground, shares: { steady: share(steadiness.steady), moving: share(steadiness.moving), chance: share(steadiness.chance) } };
}

/** 0, 0.2 and 0.6 differ by 0.2, 0.4 and 0.6: 0.4 on average. */
function meanPairDifference(values: readonly number[]): number {
  let sum = 0;
  for (let a = 0; a < values.length; a++) for (let b = a + 1; b < values.length; b++) sum += Math.abs(values[a]! - values[b]!);
  return sum / ((values.length * (values.length - 1)) / 2);
}
