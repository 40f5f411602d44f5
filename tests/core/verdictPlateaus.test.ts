import { describe, expect, it } from 'vitest';
import { gridOfOutline } from '../../shared/analysis/grid.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { arePlateaus, slantedStairShare, stairShare, type AcrossProfile } from '../../shared/analysis/verdictPlateaus.ts';
import { makeZoning } from '../../shared/analysis/zoning.ts';
import { judgedPanel } from '../bench/judgedPanel.ts';

const profileOf = (means: readonly number[]): AcrossProfile => ({ means: Float64Array.from(means), counts: new Float64Array(means.length).fill(10), places: Float64Array.from(means.keys()) });

describe('a straight border', () => {
  it('is a stair of few wide treads', () => {
    expect(stairShare(profileOf([1, 1, 1, 5, 5, 5]), 3)).toBeCloseTo(1, 12);
    // By hand: means 1 2 8 9 about 5, total 50; the halves leave 0.5 + 0.5.
    expect(stairShare(profileOf([1, 2, 8, 9]), 2)).toBeCloseTo(1 - 1 / 50, 12);
    // A ramp of 12 in three treads of four: 1 − 1/9 of the continuous ramp, by hand 15 of 143.
    expect(stairShare(profileOf([...Array(12).keys()]), 4)).toBeCloseTo(1 - 15 / 143, 12);
    expect(stairShare(profileOf([1, 5, 1, 5]), 3)).toBe(0);
  });

  it('is told from swaths of 24 m that have levels of their own', () => {
    const swaths = [0.3, -1.1, 0.9, -0.2, 1.4, -0.8].flatMap((level) => Array<number>(8).fill(level));
    const border = Array.from({ length: 48 }, (_, step) => Number(step >= 20));
    expect(arePlateaus(profileOf(swaths), [], 3)).toBe(false);
    expect(arePlateaus(profileOf(border), [], 3)).toBe(true);
    // Two sensors have no swaths in common: what both see is ground, as wide as a patch.
    expect(arePlateaus(profileOf(swaths), [profileOf(swaths.map((level) => 40 - 8 * level))], 3)).toBe(true);
    expect(arePlateaus(profileOf(swaths), [profileOf([...swaths].reverse().map((level) => level ** 2))], 3)).toBe(false);
    const narrow = [0.3, -1.1, 0.9, -0.2, 1.4, -0.8, 0.5, -1].flatMap((level) => Array<number>(4).fill(level));
    expect(arePlateaus(profileOf(narrow), [profileOf(narrow)], 3)).toBe(false);
  });

  it('that winds has a slanting riser', () => {
    expect(slantedStairShare(profileOf([1, 1, 2, 3, 4, 5, 5]), { narrowest: 2, widestRiser: 3 })).toBeCloseTo(1, 12);
    // By hand: 1 1 2 5 5 about 2.8, total 16.8; the riser of one step is off its line by 1. Without risers it joins the ones and leaves 2/3.
    expect(slantedStairShare(profileOf([1, 1, 2, 5, 5]), { narrowest: 2, widestRiser: 1 })).toBeCloseTo(1 - 2 / 3 / 16.8, 12);
    expect(slantedStairShare(profileOf([1, 1, 3, 5, 5]), { narrowest: 2, widestRiser: 0 })).toBeCloseTo(stairShare(profileOf([1, 1, 3, 5, 5]), 2), 12);
    expect(slantedStairShare(profileOf([1, 5, 1, 5]), { narrowest: 3, widestRiser: 1 })).toBe(0);
    // Twice the steps are taken together by two, each pair alike: the same stair.
    const long = [...Array<number>(60).fill(0), ...[1, 1, 2, 2, 3, 3], ...Array<number>(74).fill(4)];
    expect(slantedStairShare(profileOf(long), { narrowest: 8, widestRiser: 8 })).toBeCloseTo(1, 12);
    // By hand: pairs of −1 and 1 beside two levels; what differs in the pairs, 1 a step, is not explained, the levels' variance of 4 is.
    expect(slantedStairShare(profileOf(Array.from({ length: 140 }, (_, step) => (step < 70 ? 0 : 4) + (step % 2 === 0 ? 1 : -1))), { narrowest: 8, widestRiser: 8 })).toBeCloseTo(4 / 5, 12);
    const winding = [...Array<number>(16).fill(0), 0.1, 0.3, 0.5, 0.7, 0.9, ...Array<number>(27).fill(1)];
    const rough = winding.map((level, step) => level + (step % 2 === 0 ? 0.08 : -0.08));
    expect(stairShare(profileOf(rough), 40 / 3)).toBeLessThan(0.95);
    expect(arePlateaus(profileOf(rough), [], 3)).toBe(true);
  });

  it('that is blurred needs a second layer that steps at the same place', () => {
    const random = seededRandom(5);
    const blurred = Array.from({ length: 48 }, (_, step) => Number(step >= 20) + 0.16 * randomNormal(random));
    const share = stairShare(profileOf(blurred), 40 / 3);
    expect(share).toBeGreaterThan(0.85);
    expect(share).toBeLessThan(0.95);
    const other = Array.from({ length: 48 }, (_, step) => 3 - Number(step >= 20) + 0.1 * randomNormal(random));
    const unlike = Array.from({ length: 48 }, () => randomNormal(random));
    expect(arePlateaus(profileOf(blurred), [], 3)).toBe(false);
    expect(arePlateaus(profileOf(blurred), [profileOf(unlike)], 3)).toBe(false);
    expect(arePlateaus(profileOf(blurred), [profileOf(other)], 3)).toBe(true);
  });
});

describe('two perfect plateaus with a straight border along the rows', () => {
  const grid = gridOfOutline([[[[0, 0], [150, 0], [150, 140], [0, 140], [0, 0]]]], 32631, 3);
  const step = (noise: number, seed: number) => {
    const random = seededRandom(seed);
    return Float32Array.from(grid.inside, (inside, cell) => (inside === 1 ? (cell % grid.cols < 22 ? 0.5 : 0.7) + noise * randomNormal(random) : NaN));
  };
  const layer = (id: string, cells: Float32Array) => ({ id, type: 'vigour', role: 'evidence' as const, kind: 'number' as const, cells, weight: null });

  it.each([0.001, 0.005, 0.02])('are worth zoning, from one layer or two, with noise of %d', (noise) => {
    expect(makeZoning({ grid, layers: [layer('a', step(noise, 1))] })).toMatchObject({ advisedK: 2, verdict: { verdict: 'several' } });
    expect(makeZoning({ grid, layers: [layer('a', step(noise, 1)), layer('b', step(noise, 2).map((value) => 80 * value))] })).toMatchObject({ advisedK: 2, verdict: { verdict: 'several' } });
  });

  it.each([4000, 4019, 4029, 4059])('are not called one from vigour alone where noise blurs the border (block %d)', (firstSeed) => {
    expect(judgedPanel({ kind: 'straight', areaHa: 2, cellSizeM: 3, count: 1, firstSeed, layerCount: 1 })[0]!.verdict).not.toBe('one');
  });

  it('are never called one on simulated blocks of 20 ha', () => {
    expect(judgedPanel({ kind: 'straight', areaHa: 20, cellSizeM: 6, count: 4, firstSeed: 5000 }).filter(({ verdict }) => verdict === 'one')).toEqual([]);
  });
});
