/**
 * Does a layer tell the same story in two seasons? Rank correlation over the cells both cover, and the share of cells that stay
 * in the same third of the block (low, middle, high), which chance alone puts at a third. In: cells of two layers on one grid.
 * Cost: a sort of at most some thousand cells. Sources: Spearman 1904; thirds are common practice in yield mapping.
 */

import { averageRanks, correlation } from './agreement.ts';
import type { Cells } from './grid.ts';

export interface SeasonAgreement {
  readonly cells: number;
  readonly rankCorrelation: number;
  readonly sameThird: number;
}

const MOST_CELLS = 20_000;
const LEAST_CELLS = 30;

/** Null with fewer than 30 cells in common, or when a layer is constant there. The same layer twice gives 1 and 1. */
export function seasonAgreement(first: Cells, second: Cells): SeasonAgreement | null {
  const both: number[] = [];
  for (let cell = 0; cell < first.length; cell++) if (!Number.isNaN(first[cell]!) && !Number.isNaN(second[cell]!)) both.push(cell);
  const step = Math.max(1, Math.ceil(both.length / MOST_CELLS));
  const taken = both.filter((_, i) => i % step === 0);
  if (taken.length < LEAST_CELLS) return null;
  const [a, b] = [first, second].map((cells) => averageRanks(taken.map((cell) => cells[cell]!)));
  if ([a!, b!].some((ranks) => ranks.every((rank) => rank === ranks[0]))) return null;
  const rankCorrelation = correlation(a!, b!);
  const third = (rank: number) => Math.min(2, Math.floor((3 * (rank - 0.5)) / taken.length));
  const same = a!.reduce((sum, rank, i) => sum + Number(third(rank) === third(b![i]!)), 0);
  return { cells: both.length, rankCorrelation, sameThird: same / taken.length };
}
