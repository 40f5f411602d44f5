/**
 * k-means on a flat table of points: the best of many seeded starts.
 * In: points (standardised and weighted by the caller), k, a seeded random source. Out: centres, labels, inertia.
 * With more points than `searchCount` the starts run on a random part of them and the best few are refined on all
 * (Bradley & Fayyad 1998, "Refining initial points for k-means clustering"): 25 starts then cost little more than one.
 */

import { AnalysisError } from './analysisError.ts';
import { exchangePoints } from './kmeansExchange.ts';
import { refineCentres, type KMeansRun } from './kmeansLloyd.ts';
import { nearestWithDoubt } from './kmeansNearest.ts';
import { sampleIndices, selectPoints, type PointTable } from './kmeansPoints.ts';
import { moreCentres, seedCentres } from './kmeansSeeding.ts';
import type { Random } from './random.ts';

export interface KMeansOptions {
  readonly k: number;
  readonly random: Random;
  /** Starts from different centres; a single one is often several percent off the best. */
  readonly restarts?: number;
  /** Points that the starts run on; the refinement always uses all. */
  readonly searchCount?: number;
  /** Centres found for fewer zones: some starts add to them instead of beginning afresh. */
  readonly from?: Float64Array;
  readonly maxIterations?: number;
}

/** How many different search results are finished by exchanges on all points. */
const FINALISTS = 3;
const WARM_STARTS = 4;
const QUICK_ITERATIONS = 50;

/**
 * The run with the smallest sum of squared distances.
 * fitKMeans(pointTable([[0], [1], [10], [11]]), { k: 2, random: seededRandom(1) }).inertia is 1.
 */
export function fitKMeans(points: PointTable, options: KMeansOptions): KMeansRun {
  const { k, random, restarts = 25, searchCount = Infinity, maxIterations = 300, from } = options;
  assertEnough(points, k);
  if (k === 1) return refineCentres(points, new Float64Array(points.dimensions), maxIterations);
  const part = points.count > searchCount ? selectPoints(points, sampleIndices(points.count, searchCount, random)) : points;
  const warm = Array.from({ length: from === undefined ? 0 : WARM_STARTS }, () => refineCentres(points, moreCentres(points, from!, { k, random }), maxIterations));
  const found = differentRuns(runsFromStarts(part, { k, random, restarts, maxIterations })).slice(0, FINALISTS);
  const finalists = part === points ? found : found.map((run) => refineCentres(points, run.centres, maxIterations));
  return differentRuns([...warm, ...finalists].sort((a, b) => a.inertia - b.inertia))
    .slice(0, FINALISTS)
    .map((run) => exchangePoints(points, run))
    .reduce((best, run) => (run.inertia < best.inertia ? run : best));
}

/**
 * Sums of squares for 1, 2 … `most` zones, quickly: each number starts once from the centres of the number before and one
 * more (a warm start, as in the fast global k-means of Likas, Vlassis & Verbeek 2003) and `restarts` times afresh. For
 * references that are made by the hundred and need no last digit.
 */
export function quickInertias(points: PointTable, most: number, { random, restarts }: { random: Random; restarts: number }): number[] {
  assertEnough(points, most);
  let best = refineCentres(points, new Float64Array(points.dimensions));
  const inertias = [best.inertia];
  for (let k = 2; k <= most; k++) {
    best = refineCentres(points, moreCentres(points, best.centres, { k, random }), QUICK_ITERATIONS);
    for (const run of runsFromStarts(points, { k, random, restarts, maxIterations: QUICK_ITERATIONS }).slice(0, 1)) if (run.inertia < best.inertia) best = run;
    inertias.push(best.inertia);
  }
  return inertias;
}

function assertEnough(points: PointTable, k: number): void {
  if (k >= 1 && k <= 255 && points.count >= k) return;
  throw new AnalysisError('too-few-points', `${k} zones cannot be made of ${points.count} cells; ask for fewer zones or use smaller cells.`);
}

/** One run from each start, the smallest sum of squares first. */
function runsFromStarts(points: PointTable, { k, random, restarts, maxIterations }: Required<Omit<KMeansOptions, 'searchCount' | 'from'>>): KMeansRun[] {
  const runs: KMeansRun[] = [];
  for (let start = 0; start < restarts; start++) runs.push(refineCentres(points, seedCentres(points, k, random), maxIterations));
  return runs.sort((a, b) => a.inertia - b.inertia);
}

/** Runs that end at the same centres have the same inertia to the last digits; one of each is enough. */
function differentRuns(ranked: readonly KMeansRun[]): KMeansRun[] {
  return ranked.filter((run, i) => i === 0 || run.inertia > ranked[i - 1]!.inertia * (1 + 1e-9));
}

/** Nearest centre of every point: the zone of cells that were not in the sample the fit was made on. */
export function assignToCentres(points: PointTable, centres: Float64Array): Uint8Array {
  return nearestWithDoubt(points, centres).labels;
}
