/**
 * How alike the layers of a run are, pair by pair: Pearson's product-moment correlation (Pearson 1895) over the cells that both
 * have, after smoothing, as the advice on weights compares them. Classes have no order to correlate and are left out.
 */

import { correlation } from './agreement.ts';
import type { Cells } from './grid.ts';

export interface LayerPair {
  readonly one: string;
  readonly other: string;
  readonly correlation: number;
}

export interface PairableLayer {
  readonly id: string;
  readonly kind: 'number' | 'class';
  readonly smoothed: Cells;
}

/** Every two layers of numbers; none for two that share no cells, or of which one is the same wherever the other has a value. */
export function layerPairs(layers: readonly PairableLayer[]): LayerPair[] {
  const numbers = layers.filter(({ kind }) => kind === 'number');
  return numbers.flatMap((one, at) =>
    numbers.slice(at + 1).flatMap((other) => {
      const r = correlationOfCells(one.smoothed, other.smoothed);
      return Number.isNaN(r) ? [] : [{ one: one.id, other: other.id, correlation: r }];
    }),
  );
}

/** The layer that varies most like this one, either way round; null where nothing was compared with it. */
export function mostAlike(pairs: readonly LayerPair[], layerId: string): { readonly layerId: string; readonly correlation: number } | null {
  const own = pairs.flatMap(({ one, other, correlation: r }) => (one === layerId ? [{ layerId: other, correlation: r }] : other === layerId ? [{ layerId: one, correlation: r }] : []));
  return own.reduce<(typeof own)[number] | null>((most, pair) => (most === null || Math.abs(pair.correlation) > Math.abs(most.correlation) ? pair : most), null);
}

/** Correlation over the cells that both layers have; NaN when one of them is constant there. */
export function correlationOfCells(first: Cells, second: Cells): number {
  const inFirst = new Float64Array(first.length);
  const inSecond = new Float64Array(first.length);
  let count = 0;
  for (let cell = 0; cell < first.length; cell++) {
    if (Number.isNaN(first[cell]!) || Number.isNaN(second[cell]!)) continue;
    inFirst[count] = first[cell]!;
    inSecond[count++] = second[cell]!;
  }
  return correlation(inFirst.subarray(0, count), inSecond.subarray(0, count));
}
