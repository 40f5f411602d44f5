/**
 * The working arrays of one run of k-means, in the memory of its WebAssembly loops. One run at a time: the next one takes the
 * same memory, so whatever shall outlive a run is copied out of it. In: points and k. Cost: a copy of the points.
 */

import { kmeansKernel, type KMeansKernel } from './kmeansKernel.ts';
import type { PointTable } from './kmeansPoints.ts';

export interface KMeansMemory {
  readonly kernel: KMeansKernel;
  readonly count: number;
  readonly k: number;
  /** Bytes of a point. */
  readonly width: number;
  readonly at: Addresses;
  readonly centres: Float64Array;
  readonly sums: Float64Array;
  readonly sizes: Float64Array;
  /** How far each centre moved last. */
  readonly moved: Float64Array;
  /** What a point of each zone may have lost of its lead by these moves. */
  readonly loss: Float64Array;
  readonly halfGap: Float64Array;
  readonly labels: Uint8Array;
  readonly doubt: Float32Array;
}

export interface Addresses {
  readonly values: number;
  readonly centres: number;
  readonly sums: number;
  readonly sizes: number;
  readonly moved: number;
  readonly loss: number;
  readonly halfGap: number;
  /** A number a point: bound from below on how much farther the next centre is than the own. */
  readonly lead: number;
  /** Three more numbers a point. */
  readonly work: readonly [number, number, number];
  readonly doubt: number;
  readonly labels: number;
}

const PAGE = 65536;

export function kmeansMemory({ values, count, dimensions }: PointTable, k: number): KMeansMemory {
  const kernel = kmeansKernel();
  // The first bytes are the kernel's own.
  let end = 16;
  const place = (numbers: number) => {
    const start = end;
    end += 8 * numbers;
    return start;
  };
  const at = {
    values: place(count * dimensions),
    centres: place(k * dimensions),
    sums: place(k * dimensions),
    sizes: place(k),
    moved: place(k),
    loss: place(k),
    halfGap: place(k),
    lead: place(count),
    work: [place(count), place(count), place(count)] as const,
    doubt: place(Math.ceil(count / 2)),
    labels: place(Math.ceil(count / 8)),
  };
  const missing = end - kernel.memory.buffer.byteLength;
  if (missing > 0) kernel.memory.grow(Math.ceil(missing / PAGE));
  const { buffer } = kernel.memory;
  const doubles = (from: number, numbers: number) => new Float64Array(buffer, from, numbers);
  doubles(at.values, count * dimensions).set(values);
  return {
    kernel,
    count,
    k,
    width: 8 * dimensions,
    at,
    centres: doubles(at.centres, k * dimensions),
    sums: doubles(at.sums, k * dimensions),
    sizes: doubles(at.sizes, k),
    moved: doubles(at.moved, k),
    loss: doubles(at.loss, k),
    halfGap: doubles(at.halfGap, k),
    labels: new Uint8Array(buffer, at.labels, count),
    doubt: new Float32Array(buffer, at.doubt, count),
  };
}
