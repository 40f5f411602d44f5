import { describe, expect, it } from 'vitest';
import { bestJaccards, STABLE_FROM, weakestHold } from '../../shared/analysis/clusterHold.ts';
import { pointTable } from '../../shared/analysis/kmeansPoints.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';

describe('how alike two labellings are, zone by zone', () => {
  it('by the Jaccard coefficient of the most similar zone, by hand', () => {
    // Zone 0: points 0–2 against 0–3: 3 of 4. Zone 1: points 3–5 against 4, 5: 2 of 3.
    expect(bestJaccards([0, 0, 0, 1, 1, 1], [1, 1, 1, 1, 0, 0], 2)).toEqual([3 / 4, 2 / 3]);
    expect(bestJaccards([0, 0, 1, 1], [1, 1, 0, 0], 2)).toEqual([1, 1]);
    // A zone that nothing was made of again is like nothing.
    expect(bestJaccards([0, 0, 0, 1], [0, 0, 0, 0], 2)).toEqual([3 / 4, 1 / 4]);
  });
});

describe('whether zones come back from ground drawn anew', () => {
  /** Three plateaus on a strip of ground 300 steps long, in patches of ten. */
  const strip = (noise: number, seed: number) => {
    const random = seededRandom(seed);
    const values = Array.from({ length: 300 }, (_, at) => [Math.floor(at / 100) + noise * randomNormal(random)]);
    return { points: pointTable(values), patches: values.map((_, at) => Math.floor(at / 10)) };
  };

  it('says that as many zones as there are hold, and that one more does not', () => {
    const { points, patches } = strip(0.15, 3);
    const hold = (k: number) => weakestHold(points, patches, { k, random: seededRandom(1) });
    expect(hold(3)).toBeGreaterThan(0.95);
    expect(hold(4)).toBeLessThan(STABLE_FROM);
  });

  it('is less sure when patches are drawn than when points are, where neighbours are alike', () => {
    const random = seededRandom(8);
    // Each patch of ten has a level of its own and hardly differs within: thirty facts, not three hundred.
    const levels = Array.from({ length: 30 }, () => randomNormal(random));
    const points = pointTable(Array.from({ length: 300 }, (_, at) => [levels[Math.floor(at / 10)]! + 0.02 * randomNormal(random)]));
    const mean = (patchOf: (at: number) => number) => [1, 2, 3, 4].reduce((sum, seed) => sum + weakestHold(points, Array.from({ length: 300 }, (_, at) => patchOf(at)), { k: 4, random: seededRandom(seed) }) / 4, 0);
    expect(mean((at) => Math.floor(at / 10))).toBeLessThan(mean((at) => at) - 0.03);
  });

  it('gives the same figure for the same seed', () => {
    const { points, patches } = strip(0.4, 5);
    const once = () => weakestHold(points, patches, { k: 4, random: seededRandom(7) });
    expect(once()).toBe(once());
    expect(once()).toBeGreaterThan(0);
    expect(once()).toBeLessThanOrEqual(1);
  });
});
