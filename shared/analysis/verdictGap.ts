/**
 * Plateaus and steps, or only a slope? k-means on the calm cells of the block is compared with k-means on the calm cells of
 * random fields that vary as smoothly but hold no zones. Gap(k) = mean over the fields of ln(W_k/W_1) minus the block's own:
 * the gap statistic (Tibshirani, Walther & Hastie 2001) with covariance-matched fields in place of a uniform reference.
 * In: evidence field. Out: per k the gap, within shares and Calinski–Harabasz; apart from them how well the weakest zone
 * holds. Cost: for each of 20 fields one transform a layer and a few k-means runs of up to 1 000 points.
 */

import { weakestHold } from './clusterHold.ts';
import { surrogateFields, surrogateModel } from './covarianceSurrogates.ts';
import { quickInertias } from './kmeans.ts';
import { sampleIndices, type PointTable } from './kmeansPoints.ts';
import type { Random } from './random.ts';
import { calmFinder } from './verdictCalmCells.ts';
import type { EvidenceField } from './verdictField.ts';

export const MOST_ZONES = 6;

/** Calm cells that are asked whether zones hold. */
const HELD_CELLS = 600;

export interface GapOptions {
  /** A random number generator at its start, the same for gaps and holds, so that both look at the same calm cells. */
  readonly random: Random;
  /** Random fields compared with; they come in pairs. */
  readonly surrogates?: number;
  /** Calm cells that enter each k-means. */
  readonly sampleCount?: number;
  /** Fresh starts beside the warm one. */
  readonly restarts?: number;
}

const SAMPLE_COUNT = 1000;

/** What random fields say of k zones. */
export interface GapRow {
  readonly k: number;
  /** W_k / W_1 on the calm cells. */
  readonly withinShare: number;
  readonly gap: number;
  /** Standard deviation of ln(W_k/W_1) over the random fields, divisor n − 1. */
  readonly gapSd: number;
  /** Calinski–Harabasz on the calm cells. */
  readonly separation: number;
}

export interface GapAtK extends GapRow {
  /** How well the weakest of k zones comes back when patches of ground are drawn anew, 0…1 (see clusterHold). */
  readonly holds: number;
}

/** One row for each k = 2…6. */
export function gapRows(field: EvidenceField, { random, surrogates = 20, sampleCount = SAMPLE_COUNT, restarts = 1 }: GapOptions): GapRow[] {
  const finder = calmFinder(field, { cellSizeM: field.cellSizeM });
  const logsOf = (layers: readonly Float64Array[]) => logWithinShares(pointsAt(layers, sampledCells(finder.find(layers), { sampleCount, random })), restarts, random);
  const own = logsOf(field.layers);
  const references: (readonly number[])[] = [];
  for (const layers of surrogateFields(surrogateModel(field, field.layers), surrogates, random)) references.push(logsOf(layers).logs);
  return own.logs.map((log, i) => {
    const k = i + 2;
    const mean = references.reduce((sum, logs) => sum + logs[i]!, 0) / references.length;
    const squares = references.reduce((sum, logs) => sum + (logs[i]! - mean) ** 2, 0);
    const withinShare = Math.exp(log);
    return { k, withinShare, gap: mean - log, gapSd: Math.sqrt(squares / (references.length - 1)), separation: (1 - withinShare) / (k - 1) / (withinShare / (own.count - k)) };
  });
}

export interface HoldsOptions {
  /** As for the gaps. */
  readonly random: Random;
  readonly sampleCount?: number;
  /** Width of the patches that zones must come back from when they are drawn anew, with a random stream of its own. */
  readonly hold: { readonly patchM: number; readonly random: Random };
}

/** For each k = 2…6 how well the weakest zone of the calm cells comes back from other ground. */
export function holdsOfEveryNumber(field: EvidenceField, { random, sampleCount = SAMPLE_COUNT, hold }: HoldsOptions): number[] {
  const cells = sampledCells(calmFinder(field, { cellSizeM: field.cellSizeM }).find(field.layers), { sampleCount, random });
  const held = sampledCells(cells, { sampleCount: HELD_CELLS, random: hold.random });
  const [points, patches] = [pointsAt(field.layers, held), patchesOf(held, field, hold.patchM)];
  return Array.from({ length: MOST_ZONES - 1 }, (_, i) => weakestHold(points, patches, { k: i + 2, random: hold.random }));
}

interface SampleOptions {
  readonly sampleCount: number;
  readonly random: Random;
}

/** A random part of the given cells. */
function sampledCells(cells: Uint32Array, { sampleCount, random }: SampleOptions): Uint32Array {
  return sampleIndices(cells.length, sampleCount, random).map((at) => cells[at]!);
}

function pointsAt(layers: readonly Float64Array[], cells: Uint32Array): PointTable {
  const values = new Float64Array(cells.length * layers.length);
  for (let point = 0; point < cells.length; point++) {
    for (let l = 0; l < layers.length; l++) values[point * layers.length + l] = layers[l]![cells[point]!]!;
  }
  return { values, count: cells.length, dimensions: layers.length };
}

/** The square of ground that each cell lies in, by a number of its own. */
function patchesOf(cells: Uint32Array, { width, cellSizeM }: EvidenceField, patchM: number): Uint32Array {
  const side = patchM / cellSizeM;
  const across = Math.ceil(width / side);
  return cells.map((cell) => Math.floor(Math.floor(cell / width) / side) * across + Math.floor((cell % width) / side));
}

/** ln(W_k / W_1) for k = 2…6. Six different values at 0, .1, .2, 5, 5.1, 5.2 give −6.844 for two zones. */
export function logWithinShares(points: PointTable, restarts: number, random: Random): { logs: number[]; count: number } {
  const [whole, ...inertias] = quickInertias(points, MOST_ZONES, { random, restarts });
  // Points that fall on k places leave nothing; the floor keeps the logarithm finite.
  const logs = inertias.map((inertia) => (whole! > 0 ? Math.log(Math.max(1e-12, inertia / whole!)) : 0));
  return { logs, count: points.count };
}
