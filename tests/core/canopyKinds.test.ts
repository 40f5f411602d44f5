import { describe, expect, it } from 'vitest';
import { CanopyKinds, type CanopyThreshold } from '../../shared/analysis/canopyKinds.ts';
import { gridOfOutline } from '../../shared/analysis/grid.ts';
import { otsuThreshold, otsuTwoThresholds, valleyBetween } from '../../shared/analysis/otsu.ts';

/** A number from the normal distribution (Box and Muller 1958), the same in every run. */
function noise(seed: number): () => number {
  let state = seed;
  const uniform = () => (state = (state * 48_271) % 2_147_483_647) / 2_147_483_647;
  return () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
}

describe('two thresholds after Otsu', () => {
  it('agree with every pair tried one by one', () => {
    let state = 5;
    const counts = Array.from({ length: 24 }, () => (state = (state * 48_271) % 2_147_483_647) % 50);
    const within = (from: number, to: number) => {
      const part = counts.slice(from, to);
      const n = part.reduce((sum, count) => sum + count, 0);
      const mean = part.reduce((sum, count, at) => sum + count * at, 0) / n;
      return part.reduce((sum, count, at) => sum + count * (at - mean) ** 2, 0);
    };
    const pairs = counts.flatMap((_, low) => counts.flatMap((__, high) => (high > low && high < counts.length - 1 ? [[low, high] as const] : [])));
    const best = pairs.reduce((least, pair) => (within(0, pair[0] + 1) + within(pair[0] + 1, pair[1] + 1) + within(pair[1] + 1, 24) < within(0, least[0] + 1) + within(least[0] + 1, least[1] + 1) + within(least[1] + 1, 24) ? pair : least));
    expect(otsuTwoThresholds(counts)).toEqual(best);
  });

  it('lie in the middle of gaps, and are none where there are but two values', () => {
    expect(otsuTwoThresholds([4, 0, 0, 0, 4, 0, 0, 0, 4])).toEqual([1, 5]);
    expect(otsuTwoThresholds([4, 0, 4])).toBeNull();
  });

  it('find a full valley in one hump, though its measure is not low, and an empty one between two', () => {
    const random = noise(3);
    const histogram = (centres: readonly number[], sd: number) => {
      const counts = new Float64Array(1024);
      for (let i = 0; i < 30_000; i++) counts[Math.round(centres[i % centres.length]! + sd * random())]! += 1;
      return counts;
    };
    const one = histogram([500], 60);
    // A normal distribution cut at its mean: 2/π of its variance lies between the halves.
    expect(otsuThreshold(one)!.separability).toBeCloseTo(2 / Math.PI, 1);
    expect(valleyBetween(one, [-1, otsuThreshold(one)!.bin, 1023])).toBeGreaterThan(0.9);
    const two = histogram([400, 700], 40);
    expect(valleyBetween(two, [-1, otsuThreshold(two)!.bin, 1023])).toBeLessThan(0.1);
  });
});

const [x0, y0] = [500_000, 4_950_000];
const grid = gridOfOutline([[[[x0, y0], [x0 + 100, y0], [x0 + 100, y0 + 60], [x0, y0 + 60], [x0, y0]]]], 32631, 2);

/** Nine pixels to a cell and more: 0.25 m pixels of rows every 2.5 m, canopy 0.5 m wide. */
function settle(canopy: (x: number) => number, alley: (x: number, y: number) => number, sd = 0.03): CanopyThreshold {
  const random = noise(7);
  const kinds = new CanopyKinds(grid, 2.5);
  for (let y = 0.125; y < 60; y += 0.25) {
    for (let x = 0.125; x < 100; x += 0.25) {
      const isCanopy = Math.abs((x % 2.5) - 1.25) <= 0.25;
      kinds.add(Math.floor((60 - y) / 2) * grid.cols + Math.floor(x / 2), (isCanopy ? canopy(x) : alley(x, y)) + sd * random());
    }
  }
  return kinds.settle()!;
}

describe('which pixels are canopy', () => {
  it('is told by one threshold where there are two kinds', () => {
    const { threshold, kinds, valley } = settle(() => 0.75, () => 0.15);
    expect(kinds).toBe('two');
    expect(threshold).toBeGreaterThan(0.3);
    expect(threshold).toBeLessThan(0.65);
    expect(valley).toBeLessThan(0.1);
  });

  it('is the greenest of three kinds where cover crop grows in half the alleys', () => {
    const { threshold, kinds } = settle(() => 0.8, (_x, y) => (y > 30 ? 0.45 : 0.1));
    expect(kinds).toBe('three');
    // One threshold alone would stand between soil and cover crop or in the middle of the cover crop.
    expect(threshold).toBeGreaterThan(0.55);
    expect(threshold).toBeLessThan(0.75);
  });

  it('keeps weak vines beside strong ones', () => {
    const { threshold, kinds } = settle((x) => (x < 50 ? 0.45 : 0.85), () => 0.1);
    expect(kinds).toBe('patchy');
    expect(threshold).toBeGreaterThan(0.2);
    expect(threshold).toBeLessThan(0.4);
  });

  it('is no more certain for two soils, which either threshold parts from the canopy', () => {
    const { kinds, threshold } = settle(() => 0.8, (_x, y) => (y > 30 ? 0.25 : 0.08), 0.02);
    expect(kinds).toBe('two');
    expect(threshold).toBeGreaterThan(0.32);
  });

  it('is doubtful where alleys are as green as vines', () => {
    expect(settle(() => 0.6, () => 0.58, 0.08).valley).toBeGreaterThan(0.8);
  });
});
