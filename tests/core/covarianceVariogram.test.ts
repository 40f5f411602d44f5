/** The variogram against its definition, pair by pair, and random fields against the variogram of the layer they stand for. */

import { describe, expect, it } from 'vitest';
import { lagIndex, type MaskedPlane } from '../../shared/analysis/covariance.ts';
import { frequencyRings, withoutNegativePower } from '../../shared/analysis/covarianceRings.ts';
import { surrogateFields, surrogateModel } from '../../shared/analysis/covarianceSurrogates.ts';
import { variogramSums } from '../../shared/analysis/covarianceVariogram.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { standardiseClipped } from '../../shared/analysis/verdictField.ts';
import { noiseBlock, slopeBlock } from '../bench/simulatedBlock.ts';

/** Half the sum of the products of both layers' differences over all pairs of cells (dx, dy) apart, as Matheron's estimators are defined; for one layer its squares. */
function variogramByPairs({ width, height, mask }: MaskedPlane, values: ArrayLike<number>, [dx, dy]: readonly [number, number], others = values): { half: number; pairs: number } {
  let [half, pairs] = [0, 0];
  for (let row = 0; row < height; row++) {
    for (let col = 0; col < width; col++) {
      const [toRow, toCol] = [row + dy, col + dx];
      if (toRow < 0 || toRow >= height || toCol < 0 || toCol >= width) continue;
      if (mask[row * width + col] === 0 || mask[toRow * width + toCol] === 0) continue;
      const [from, to] = [row * width + col, toRow * width + toCol];
      half += ((values[from]! - values[to]!) * (others[from]! - others[to]!)) / 2;
      pairs++;
    }
  }
  return { half, pairs };
}

describe('half sums of products of differences', () => {
  it.each([1, 2, 3])('are those of all pairs of cells in the mask, at every lag and whatever is added to the values: %i layers', (layerCount) => {
    const random = seededRandom(4);
    const plane = { width: 13, height: 9, mask: Uint8Array.from({ length: 117 }, () => (random() < 0.7 ? 1 : 0)) };
    const layers = Array.from({ length: layerCount }, (_, layer) => Float64Array.from(plane.mask, (inside) => inside * (20 * layer + randomNormal(random))));
    const { transform, pairs, halves } = variogramSums(plane, layers);
    expect(halves).toHaveLength((layerCount * (layerCount + 1)) / 2);
    for (const lag of [[0, 0], [1, 0], [0, 1], [3, -2], [-5, 4], [12, 8]] as const) {
      const at = lagIndex(transform, lag[0], lag[1]);
      for (let a = 0, couple = 0; a < layerCount; a++) {
        for (let b = 0; b <= a; b++, couple++) {
          const byPairs = variogramByPairs(plane, layers[a]!, lag, layers[b]!);
          expect(halves[couple]![at]).toBeCloseTo(byPairs.half, 6);
          expect(pairs[at]).toBe(byPairs.pairs);
        }
      }
    }
  });
});

describe('rings of frequencies', () => {
  it('keep their sum, and what one has less than nothing is taken from longer waves', () => {
    const rings = Uint16Array.from([0, 1, 1, 2, 2, 3]);
    expect([...withoutNegativePower(Float64Array.from([5, 3, -1, 1, -2, 4]), rings)]).toEqual([5, 1, 0, 0, 0, 4]);
    expect([...withoutNegativePower(Float64Array.from([-5, 1, 1, 1, 0, 0]), rings)]).toEqual([0, 1, 1, 1, 0, 0]);
  });

  it('count waves over the width of the block, the same up and down', () => {
    const rings = frequencyRings({ width: 8, height: 4 }, 4);
    expect([...rings.slice(0, 8)]).toEqual([0, 1, 1, 2, 2, 2, 1, 1]);
    expect([0, 1, 2, 3].map((row) => rings[row * 8])).toEqual([0, 1, 2, 1]);
  });
});

describe('random fields in place of a layer', () => {
  const kinds = [
    ['a long slope', (seed: number) => slopeBlock('long', { areaHa: 2, cellSizeM: 4, random: seededRandom(seed) })],
    ['a short one', (seed: number) => slopeBlock('medium', { areaHa: 2, cellSizeM: 4, random: seededRandom(seed) })],
    ['noise a few metres wide', (seed: number) => noiseBlock('short', { areaHa: 2, cellSizeM: 4, random: seededRandom(seed) })],
  ] as const;

  it.each(kinds)('are as rough as it from cell to cell and over a fifth of the block: %s', (_, blockOf) => {
    for (const seed of [1, 2, 3]) {
      const { grid, conductivity } = blockOf(seed);
      const plane = { width: grid.cols, height: grid.rows, mask: grid.inside };
      const layer = standardiseClipped(conductivity, grid.inside);
      const roughness = (values: ArrayLike<number>, lag: number) => {
        const [across, down] = [variogramByPairs(plane, values, [lag, 0]), variogramByPairs(plane, values, [0, lag])];
        return (across.half + down.half) / (across.pairs + down.pairs);
      };
      const fields = [...surrogateFields(surrogateModel(plane, [layer]), 40, seededRandom(seed))];
      for (const lag of [1, 2, 7]) {
        const mean = fields.reduce((sum, [field]) => sum + roughness(field!, lag) / fields.length, 0);
        expect(mean / roughness(layer, lag)).toBeGreaterThan(0.8);
        expect(mean / roughness(layer, lag)).toBeLessThan(1.5);
      }
    }
  });
});
