/** The nearest of given centres for every point of a table of any length, a part at a time. */

import { kmeansMemory } from './kmeansMemory.ts';
import type { PointTable } from './kmeansPoints.ts';

/** Points in the working memory at once. */
const PART = 8192;

export interface NearestCentres {
  /** Zone 0…k−1 of every point. */
  readonly labels: Uint8Array;
  /** Sum of squares of all points to their centre. */
  readonly inertia: number;
  /** Squared distance to the own centre over that to the next, 0…1. */
  readonly doubt: Float32Array;
}

/**
 * Nearest centre of every point with the doubt about it, 0 … 1. For fuzzy memberships with exponent 2 (Bezdek 1981) the
 * ratio of the second largest membership to the largest, called confusion index in soil mapping (Burrough, van Gaans &
 * Hootsmans 1997, from memory), is the ratio of the squared distances.
 */
export function nearestWithDoubt({ values, count, dimensions }: PointTable, centres: Float64Array): NearestCentres {
  const labels = new Uint8Array(count);
  const doubt = new Float32Array(count);
  let inertia = 0;
  for (let from = 0; from < count; from += PART) {
    const to = Math.min(count, from + PART);
    const memory = kmeansMemory({ values: values.subarray(from * dimensions, to * dimensions), count: to - from, dimensions }, centres.length / dimensions);
    const { kernel, k, width, at } = memory;
    memory.centres.set(centres);
    inertia = kernel.doubt(at.values, to - from, width, k, at.centres, at.labels, at.doubt, inertia);
    labels.set(memory.labels, from);
    doubt.set(memory.doubt, from);
  }
  return { labels, inertia, doubt };
}
