import { describe, expect, it } from 'vitest';
import { layerStats } from '../../shared/analysis/layerStats.ts';
import { quantileOfSorted, quantilesOf } from '../../shared/analysis/quantile.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import { smooth } from '../../shared/analysis/smooth.ts';
import { standardise } from '../../shared/analysis/standardise.ts';
import { picture, pictureGrid, rectangleGrid } from './pictures.ts';

const isGiven = (value: number) => !Number.isNaN(value);

describe('quantiles', () => {
  // Source: numpy 1.24.2, numpy.quantile (linear), which is also R's type 7.
  it('agree with numpy', () => {
    const sorted = [1, 2, 3, 4, 10];
    const expected = [1.02, 1.4, 3, 7.6, 9.88];
    [0.005, 0.1, 0.5, 0.9, 0.995].forEach((share, at) => expect(quantileOfSorted(sorted, share)).toBeCloseTo(expected[at]!, 12));
    expect(quantilesOf(Float32Array.from([10, 2, 4, 1, 3]), [0.005, 0.1, 0.5, 0.9, 0.995])).toEqual(expected.map((value) => expect.closeTo(value, 6)));
    expect(quantileOfSorted([7], 0.3)).toBe(7);
    expect(quantileOfSorted([], 0.5)).toBeNaN();
    expect(quantilesOf(new Float32Array(0), [0.5])).toEqual([NaN]);
  });

  it('of values in any order are those of the sorted values, and the values stay as they are', () => {
    const random = seededRandom(12);
    for (const count of [1, 2, 3, 10, 501]) {
      const values = Float32Array.from({ length: count }, () => Math.floor(random() * (count / 2 + 1)) - 3);
      const before = values.slice();
      const sorted = values.slice().sort();
      const shares = [0, 0.005, 0.25, 0.25, 0.5, 0.77, 0.995, 1];
      expect(quantilesOf(values, shares)).toEqual(shares.map((share) => quantileOfSorted(sorted, share)));
      expect(values).toEqual(before);
    }
  });
});

describe('standardising', () => {
  const values = Float32Array.from([3.1, 2.7, 4.4, 9, -5, 3.3, 2.9, 3]);
  const grid = rectangleGrid(8, 1);

  // Source: numpy 1.24.2: clip to the 10 and 90 % quantiles, mean, std (population).
  it('draws extremes in, then takes mean and population deviation', () => {
    const { cells, centre, scale, low, high } = standardise(grid, values, { clip: [0.1, 0.9] });
    expect([low, high]).toEqual([expect.closeTo(0.39, 6), expect.closeTo(5.78, 6)]);
    expect(centre).toBeCloseTo(3.19625, 6);
    expect(scale).toBeCloseTo(1.43144977, 6);
    const expected = [-0.0672395, -0.3466765, 0.8409307, 1.8049882, -1.9604251, 0.072479, -0.206958, -0.1370988];
    expected.forEach((value, cell) => expect(cells[cell]).toBeCloseTo(value, 5));
  });

  // Source: numpy 1.24.2: median 3.05, 1.4826 × median absolute deviation 0.44478.
  it('can take median and median absolute deviation instead', () => {
    const { centre, scale } = standardise(grid, values, { method: 'robust', clip: [0, 1] });
    expect(centre).toBeCloseTo(3.05, 6);
    expect(scale).toBeCloseTo(0.44478, 5);
  });

  it('keeps to the cells inside, leaves gaps as they are and the input alone', () => {
    const block = pictureGrid(picture('11.11'));
    const layer = Float32Array.from([1, 3, 1e6, NaN, 5]);
    const before = layer.slice();
    const { cells, centre } = standardise(block, layer, { clip: [0, 1] });
    expect(centre).toBe(3);
    expect(Array.from(cells, isGiven)).toEqual([true, true, false, false, true]);
    expect(cells[1]).toBe(0);
    expect(layer).toEqual(before);
  });

  it('gives a layer of equal values no spread and no voice', () => {
    const { cells, scale } = standardise(grid, new Float32Array(8).fill(0.3));
    expect(scale).toBeCloseTo(0, 6);
    expect(Array.from(cells)).toEqual(new Array(8).fill(0));
  });

  it('keeps the digits of a layer far from zero', () => {
    const high = Float32Array.from([4000.25, 4000.5, 4000.75, 4001, 4000.25, 4000.5, 4000.75, 4001]);
    expect(standardise(grid, high, { clip: [0, 1] }).scale).toBeCloseTo(Math.sqrt(0.078125), 9);
  });

  it('turns to the deviation where more than half of the values are equal', () => {
    const { scale } = standardise(grid, Float32Array.from([2, 2, 2, 2, 2, 2, 2, 10]), { method: 'robust', clip: [0, 1] });
    expect(scale).toBeCloseTo(Math.sqrt(7), 6);
  });
});

describe('smoothing', () => {
  const block = pictureGrid(picture('11101 11111 10111 11110'));
  const layer = Float32Array.from([1, 2, 4, 0, 3, 2, 9, 4, 1, 0, 5, 1, 0, 2, 8, 3, 3, 7, 1, 2]);

  // Source: scipy 1.10.1, gaussian_filter(z·m, mode='constant', truncate=4) / gaussian_filter(m, …).
  it.each([
    [0.75, [2.168882, 3.390905, 3.64871, 2.571554, 2.156431, 3.522904, 4.740493, 3.483979, 2.138497, 2.210136, 4.112244, 4.079147, 2.720947, 2.561769, 4.183848, 3.494764, 3.699369, 3.769393, 2.775262, 3.96431]],
    [1.5, [3.235857, 3.324115, 3.200116, 2.938354, 2.725, 3.489438, 3.4676, 3.260266, 3.002246, 2.867673, 3.634283, 3.542504, 3.315098, 3.108136, 3.071167, 3.666254, 3.573737, 3.382088, 3.22785, 3.250623]],
  ])('with a mask agrees with scipy, sigma %d', (sigmaM, expected) => {
    const cells = smooth(block, layer, { sigmaM });
    expected.forEach((value, cell) => {
      if (block.inside[cell] === 1) expect(cells[cell]).toBeCloseTo(value, 5);
      else expect(cells[cell]).toBeNaN();
    });
  });

  it('fills gaps inside the block only when asked to', () => {
    const full = rectangleGrid(5, 4);
    const gaps = layer.map((value, cell) => (block.inside[cell] === 1 ? value : NaN));
    expect(Array.from(smooth(full, gaps, { sigmaM: 1.5 }), isGiven)).toEqual(Array.from(gaps, isGiven));
    const filled = smooth(full, gaps, { sigmaM: 1.5, fillMissing: true });
    // The same scipy figures at the cells that were gaps.
    expect([filled[3], filled[11], filled[19]]).toEqual([expect.closeTo(2.938354, 5), expect.closeTo(3.542504, 5), expect.closeTo(3.250623, 5)]);
  });

  it('leaves equal values equal, and with sigma 0 leaves all as it is', () => {
    smooth(block, new Float32Array(20).fill(0.31), { sigmaM: 2 }).forEach((value, cell) => block.inside[cell] === 1 && expect(value).toBeCloseTo(0.31, 6));
    const same = smooth(block, layer, { sigmaM: 0 });
    layer.forEach((value, cell) => block.inside[cell] === 1 && expect(same[cell]).toBe(value));
  });

  it('takes sigma in metres', () => {
    const coarse = pictureGrid(picture('11101 11111 10111 11110'), 4);
    expect(smooth(coarse, layer, { sigmaM: 6 })).toEqual(smooth(block, layer, { sigmaM: 1.5 }));
  });
});

describe('statistics of a layer', () => {
  it('count cells inside, and cover by area', () => {
    const grid = { ...pictureGrid(picture('11.1')), share: Float32Array.from([1, 1, 0.25, 0.75]) };
    const stats = layerStats(grid, Float32Array.from([2, NaN, 50, 4]), { bins: 4, shares: [0.5] });
    // By hand: 2 of 3 cells inside; 2 of 3 units of area, the rim cell with a value included.
    expect(stats).toMatchObject({ n: 2, missing: 1, mean: 3, sd: 1, min: 2, max: 4, quantiles: [{ share: 0.5, value: 3 }] });
    expect(stats.coverage).toBeCloseTo(2 / 3, 6);
    expect(stats.histogram).toEqual({ from: 2, to: 4, counts: [1, 0, 0, 1] });
  });

  it('of a layer without values are empty, not zero', () => {
    const stats = layerStats(rectangleGrid(2, 2), new Float32Array(4).fill(NaN));
    expect(stats).toEqual({ n: 0, missing: 4, coverage: 0, mean: null, sd: null, min: null, max: null, quantiles: [], histogram: null });
  });

  it('put every value in one bin, the highest in the last, equal values in the first', () => {
    const stats = layerStats(rectangleGrid(5, 1), Float32Array.from([0, 1, 2, 3, 4]), { bins: 4 });
    expect(stats.histogram!.counts).toEqual([1, 1, 1, 2]);
    expect(layerStats(rectangleGrid(3, 1), new Float32Array(3).fill(7), { bins: 4 }).histogram!.counts).toEqual([3, 0, 0, 0]);
  });
});
