import { describe, expect, it } from 'vitest';
import { choleskyFactor, solveSymmetric } from '../../shared/analysis/covarianceCholesky.ts';
import { lagIndex, lagSums, secondLowest, sectorCorrelations, type MaskedPlane } from '../../shared/analysis/covariance.ts';
import { createPlaneTransform, powerOfTwoAtLeast } from '../../shared/analysis/covarianceFft.ts';
import { surrogateFields, surrogateModel } from '../../shared/analysis/covarianceSurrogates.ts';
import { fittedSurface } from '../../shared/analysis/covarianceTrend.ts';
import { correlation } from '../../shared/analysis/agreement.ts';
import { pointTable } from '../../shared/analysis/kmeansPoints.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { judge, type VerdictInput } from '../../shared/analysis/verdict.ts';
import { calmFinder, gradientSquares } from '../../shared/analysis/verdictCalmCells.ts';
import { evidenceField } from '../../shared/analysis/verdictField.ts';
import { checkOnFruit, withFruit } from '../../shared/analysis/verdictFruit.ts';
import { logWithinShares } from '../../shared/analysis/verdictGap.ts';
import { anovaByZone, leaveOneOutRSquared, testOnReadings, type ZoneReading } from '../../shared/analysis/verdictReadings.ts';
import { stripePattern, withoutStripes } from '../../shared/analysis/verdictStripes.ts';
import { patchWidthM } from '../../shared/analysis/verdictStructure.ts';
import { gridOfOutline } from '../../shared/analysis/grid.ts';

interface Picture {
  readonly plane: MaskedPlane;
  readonly values: Float64Array;
}

/** A square plane standardised with the population standard deviation; cells that are not inside are 0. */
function picture(side: number, valueAt: (row: number, col: number) => number, isInside = (_row: number, _col: number) => true): Picture {
  const at = (cell: number) => [Math.floor(cell / side), cell % side] as const;
  const mask = Uint8Array.from({ length: side * side }, (_, cell) => Number(isInside(...at(cell))));
  const raw = Float64Array.from(mask, (_, cell) => valueAt(...at(cell)));
  const inside = raw.filter((_, cell) => mask[cell] === 1);
  const mean = inside.reduce((sum, value) => sum + value, 0) / inside.length;
  const sd = Math.sqrt(inside.reduce((sum, value) => sum + (value - mean) ** 2, 0) / inside.length);
  return { plane: { width: side, height: side, mask }, values: raw.map((value, cell) => (mask[cell] === 1 ? (value - mean) / sd : 0)) };
}

const halves = (_row: number, col: number) => Number(col >= 8);

describe('a layer against itself at a distance', () => {
  it('sums products and pairs at every lag, pairs that wrap around left out', () => {
    const { plane, values } = picture(4, (_row, col) => (col < 2 ? 1 : -1));
    const sums = lagSums(plane, values);
    // Worked by hand: four rows of 1 1 −1 −1.
    [16, 4, -8, -4].forEach((value, dx) => expect(sums.products[lagIndex(sums.transform, dx, 0)]).toBeCloseTo(value, 9));
    [16, 12, 8, 4].forEach((value, dx) => expect(sums.pairs[lagIndex(sums.transform, dx, 0)]).toBe(value));
    expect(sums.products[lagIndex(sums.transform, -1, 0)]).toBeCloseTo(4, 9);
  });

  // 16 × 16 cells, distance 5 cells; computed with numpy and scipy by direct sums.
  it.each([
    ['two halves', picture(16, halves), [0.8845, 0.4007, 0.2174, 0.1615, 0.4007, 0.7931], [1195, 911, 667, 1195, 911, 667], 0.2174],
    ['a ramp', picture(16, (_row, col) => col), [0.8854, 0.4344, 0.2788, 0.2367, 0.4344, 0.7947], [1195, 911, 667, 1195, 911, 667], 0.2788],
    ['halves with a corner missing', picture(16, halves, (row, col) => row >= 5 || col >= 5), [0.8594, 0.3662, 0.1869, 0.1241, 0.3135, 0.7388], [1047, 840, 594, 1020, 761, 567], 0.1869],
    ['stripes of four columns', picture(16, (_row, col) => (Math.floor(col / 4) % 2 === 0 ? 1 : -1)), [0.6536, -0.6268, -0.8261, -0.7423, -0.6268, 0.3793], [1195, 911, 667, 1195, 911, 667], -0.7423],
  ])('correlates per direction: %s', (_name, { plane, values }, expected, pairs, worst) => {
    const sectors = sectorCorrelations(lagSums(plane, values), 5, 1);
    expected.forEach((value, sector) => expect(sectors.correlations[sector]).toBeCloseTo(value, 4));
    expect(sectors.pairs).toEqual(pairs);
    expect(secondLowest(sectors)).toBeCloseTo(worst, 4);
  });

  it('has 0.4785 at that distance over all directions together, where halves differ', () => {
    const { plane, values } = picture(16, halves);
    const { correlations, pairs } = sectorCorrelations(lagSums(plane, values), 5, 1);
    const all = pairs.reduce((sum, count) => sum + count, 0);
    // The same direct sums; the mean of the six would be 0.4763.
    expect(correlations.reduce((sum, r, sector) => sum + r * pairs[sector]!, 0) / all).toBeCloseTo(0.4785, 4);
  });

  it('finds stripes by the profile that stands out, and takes them off', () => {
    const columns = [1, 1, -1, -1, 1, 1, -1, -1];
    const { plane, values } = picture(8, (_row, col) => columns[col]!);
    const pattern = stripePattern(plane, values, 1);
    // numpy least squares and bincount.
    expect(pattern.residualVariance).toBeCloseTo(0.8095, 4);
    expect(pattern.strongest).toBeCloseTo(1, 4);
    expect(pattern.median).toBeCloseTo(0.0661, 4);
    expect(pattern.isStriped).toBe(true);
    withoutStripes(plane, values, { pattern, stepCells: 1 }).forEach((value) => expect(value).toBeCloseTo(0, 12));
  });

  it('looks a sixth of the block away, between 15 and 40 m', () => {
    expect([4000, 20_000, 200_000].map(patchWidthM)).toEqual([15, expect.closeTo(23.57, 2), 40]);
  });
});

describe('the Fourier plane', () => {
  it('returns to where it came from and matches a sum worked out directly', () => {
    const random = seededRandom(1);
    const plane = Float64Array.from({ length: 2 * 8 * 4 }, () => randomNormal(random));
    const transform = createPlaneTransform(8, 4);
    const spectrum = transform.forward(plane);
    let [real, imaginary] = [0, 0];
    for (let row = 0; row < 4; row++) {
      for (let col = 0; col < 8; col++) {
        const angle = -2 * Math.PI * ((3 * col) / 8 + (2 * row) / 4);
        const [a, b] = [plane[2 * (row * 8 + col)]!, plane[2 * (row * 8 + col) + 1]!];
        real += a * Math.cos(angle) - b * Math.sin(angle);
        imaginary += a * Math.sin(angle) + b * Math.cos(angle);
      }
    }
    expect(spectrum[2 * (2 * 8 + 3)]).toBeCloseTo(real, 9);
    expect(spectrum[2 * (2 * 8 + 3) + 1]).toBeCloseTo(imaginary, 9);
    transform.inverse(spectrum).forEach((value, i) => expect(value).toBeCloseTo(plane[i]!, 9));
    expect([2, 3, 110, 128].map(powerOfTwoAtLeast)).toEqual([2, 4, 128, 128]);
  });

  it('solves a small system and leaves a dependent column out', () => {
    expect([...choleskyFactor([4, 2, 2, 5], 2)]).toEqual([2, 0, 1, 2]);
    solveSymmetric([4, 2, 2, 5], [10, 9]).forEach((value, i) => expect(value).toBeCloseTo([2, 1][i]!, 12));
    expect([...solveSymmetric([1, 1, 1, 1], [3, 3])]).toEqual([3, 0]);
  });
});

describe('random fields without zones', () => {
  const side = 48;
  const smooth = picture(side, (row, col) => Math.sin(row / 7) + Math.cos(col / 9) + 0.3 * Math.sin((row + 2 * col) / 5));
  const other = { ...smooth, values: smooth.values.map((value, cell) => 0.8 * value + 0.6 * Math.sin(cell * 12.9898)) };

  it('keep variance, smoothness and the correlation between layers', () => {
    const model = surrogateModel(smooth.plane, [smooth.values, other.values]);
    const fields = [...surrogateFields(model, 40, seededRandom(3))];
    const mean = (figure: (layers: Float64Array[]) => number) => fields.reduce((sum, layers) => sum + figure(layers) / fields.length, 0);
    const variance = (field: Float64Array) => field.reduce((sum, value) => sum + value * value, 0) / field.length;
    const nextDoor = (field: Float64Array) => correlation(field.filter((_, cell) => cell % side < side - 1), field.filter((_, cell) => cell % side > 0));
    expect(fields).toHaveLength(40);
    expect(mean((layers) => variance(layers[0]!))).toBeCloseTo(1, 0);
    expect(mean((layers) => nextDoor(layers[0]!))).toBeGreaterThan(0.95);
    expect(mean((layers) => correlation(layers[0]!, layers[1]!))).toBeCloseTo(correlation(smooth.values, other.values), 1);
  });

  it('keep a slope as it is', () => {
    const ramp = picture(32, (row, col) => 3 * col - row);
    const [[first] = []] = [...surrogateFields(surrogateModel(ramp.plane, [ramp.values]), 2, seededRandom(1))];
    first!.forEach((value, cell) => expect(value).toBeCloseTo(ramp.values[cell]!, 6));
    fittedSurface(ramp.plane, ramp.values, 1).forEach((value, cell) => expect(value).toBeCloseTo(ramp.values[cell]!, 9));
  });

  it('are the same for the same seed', () => {
    const model = surrogateModel(smooth.plane, [smooth.values]);
    const draw = () => [...surrogateFields(model, 3, seededRandom(8))].map(([field]) => field!);
    expect(draw()).toEqual(draw());
  });
});

describe('calm cells', () => {
  it('have slopes by central differences and none on the edge', () => {
    const step = { width: 6, height: 6, mask: new Uint8Array(36).fill(1) };
    const values = Float64Array.from({ length: 36 }, (_, cell) => Number(cell % 6 >= 3) + Number(Math.floor(cell / 6) >= 3));
    const slopes = gradientSquares(step, values);
    const interior = [1, 2, 3, 4].map((row) => [1, 2, 3, 4].map((col) => Math.sqrt(slopes[row * 6 + col]!)));
    const half = Math.SQRT1_2; // numpy.gradient gives .7071 where both steps meet
    [[0, 0.5, 0.5, 0], [0.5, half, half, 0.5], [0.5, half, half, 0.5], [0, 0.5, 0.5, 0]].forEach((row, i) => row.forEach((value, j) => expect(interior[i]![j]).toBeCloseTo(value, 6)));
    expect(slopes[0]).toBeNaN();
  });

  it('lie away from a step', () => {
    const { plane, values } = picture(20, (_row, col) => Number(col >= 10) * 5);
    const calm = calmFinder(plane, { cellSizeM: 1, smoothingM: 1 }).find([values]);
    expect([...calm].some((cell) => [9, 10].includes(cell % 20) && Math.floor(cell / 20) % 19 !== 0)).toBe(false);
    expect(calm.length / 400).toBeGreaterThan(0.55);
  });

  it('leave ln(W2/W1) of two tight groups at −6.844', () => {
    // 0, .1, .2, 5, 5.1, 5.2: W1 = 37.54, W2 = 0.04 by hand.
    const { logs } = logWithinShares(pointTable([[0], [0.1], [0.2], [5], [5.1], [5.2]]), 5, seededRandom(1));
    expect(logs[0]).toBeCloseTo(-6.844283, 5);
  });
});

describe('the evidence field', () => {
  const grid = gridOfOutline([[[[0, 0], [40, 0], [40, 40], [0, 40], [0, 0]]]], 32631, 1);

  it('averages in squares down to the number of cells asked for and standardises', () => {
    const layer = Float32Array.from(grid.inside, (_, cell) => cell % grid.cols);
    const field = evidenceField(grid, [layer], { mostCells: 400 });
    expect([field.width, field.height, field.cellSizeM, field.cellCount]).toEqual([20, 20, 2, 400]);
    const values = field.layers[0]!;
    expect(values.reduce((sum, value) => sum + value, 0)).toBeCloseTo(0, 9);
    expect(values.reduce((sum, value) => sum + value * value, 0) / 400).toBeCloseTo(1, 9);
  });

  it('counts a cell only where every layer has a value', () => {
    const whole = Float32Array.from(grid.inside, (_, cell) => cell % 7);
    const half = whole.map((value, cell) => (cell % grid.cols < 20 ? value : NaN));
    expect(evidenceField(grid, [whole, half], {}).cellCount).toBe(800);
    expect(() => evidenceField(grid, [half, whole.map((value, cell) => (cell % grid.cols < 20 ? NaN : value))], {})).toThrow(/0 cells in common/);
    expect(() => evidenceField(grid, [whole.fill(3)], {})).toThrow(/same value everywhere/);
  });
});

describe('the verdict', () => {
  const input = (structure: number[], gap: number, rest: { gapSd?: number; areaM2?: number; isStriped?: boolean } = {}): VerdictInput => ({
    areaM2: rest.areaM2 ?? 20_000,
    layerIds: structure.map((_, i) => `layer ${i}`),
    structures: structure.map((value) => ({ structure: value, byDirection: [], isStriped: rest.isStriped ?? false })),
    curve: [{ k: 2, withinShare: 0.5, gap: gap / 2, gapSd: 0.1, separation: 10, holds: 1 }, { k: 3, withinShare: 0.3, gap, gapSd: rest.gapSd ?? 0.1, separation: 20, holds: 1 }],
  });

  it('is one without structure, several with plateaus, worth testing on a slope', () => {
    expect(judge(input([0.02, -0.05], 0.1)).verdict).toBe('one');
    expect(judge(input([0.4, 0.5], 1.2)).verdict).toBe('several');
    expect(judge(input([0.4, 0.5], 0.2)).verdict).toBe('test');
  });

  it('does not take the levels of swaths for zones', () => {
    expect(judge(input([0.02, 0.0], 0.9)).verdict).toBe('several');
    expect(judge(input([0.02, 0.0], 0.9, { isStriped: true })).verdict).toBe('one');
  });

  it('wants a gap that stands out from the random fields among themselves', () => {
    expect(judge(input([0.4, 0.5], 0.7, { gapSd: 0.4 })).verdict).toBe('test');
  });

  it('asks more of a block under one hectare and says that it is too small to judge', () => {
    const small = judge(input([0.4, 0.5], 0.6, { areaM2: 9000 }));
    expect(small).toMatchObject({ verdict: 'test', isJudged: false });
    expect(small.reasons.map(({ code }) => code)).toContain('too-small');
    expect(judge(input([0.4, 0.5], 0.6)).verdict).toBe('several');
  });

  it('gives no judgement without a measured layer', () => {
    expect(judge({ areaM2: 20_000, layerIds: [], structures: [], curve: [] })).toMatchObject({ isJudged: false, reasons: [{ code: 'no-measured-layer' }] });
  });

  it('carries the figures and the limits it was made with', () => {
    const { reasons } = judge(input([0.4, 0.5], 1.2));
    expect(reasons[0]).toMatchObject({ code: 'structure', figures: { value: expect.closeTo(0.45, 9), limit: 0.12 } });
    expect(reasons[1]).toMatchObject({ code: 'plateaus', figures: { value: 1.2, limit: 0.5, k: 3 } });
  });
});

const zoned = (groups: readonly (readonly number[])[], rows?: readonly (readonly string[])[]): ZoneReading[] =>
  groups.flatMap((values, zone) => values.map((value, i) => ({ value, zone: zone + 1, row: rows?.[zone]?.[i] ?? null })));

describe('readings of fruit', () => {
  it('are analysed by zone as R does it', () => {
    // R 4.2.2 aov and the textbook formula of omega squared.
    const anova = anovaByZone(zoned([[21.0, 21.4, 20.8, 21.9, 21.2], [22.5, 22.9, 23.1, 22.2, 22.8], [24.0, 23.6, 24.4, 23.9]]))!;
    expect(anova.f).toBeCloseTo(59.145989, 5);
    expect([anova.dfBetween, anova.dfWithin]).toEqual([2, 11]);
    expect(anova.p / 1.3002e-6).toBeCloseTo(1, 4);
    expect(anova.rSquared).toBeCloseTo(0.914921249, 8);
    expect(anova.omegaSquared).toBeCloseTo(0.892549025, 8);
    expect(anovaByZone(zoned([[1, 2, 3]]))).toBeNull();
  });

  it.each([
    [[1, 1, 1, 2, 2, 2], 0.892241],
    [[1, 2, 1, 2, 1, 2], -0.400862],
    [[1, 1, 1, 1, 2, 2], 0.534376],
  ])('are foretold by the rest of zones %j with R² %d', (zones, expected) => {
    expect(leaveOneOutRSquared([1, 2, 3, 7, 8, 9], zones)).toBeCloseTo(expected, 6); // computed with numpy
  });

  const vines = (difference: number, seed: number): ZoneReading[] => {
    const random = seededRandom(seed);
    return Array.from({ length: 60 }, (_, i) => ({ value: 22 + difference * (i % 2) + randomNormal(random), zone: 1 + (i % 2), row: `${Math.floor(i / 6)}` }));
  };

  it('confirm zones that differ and not zones that do not', () => {
    expect(testOnReadings(vines(2, 1), seededRandom(9))).toMatchObject({ shuffle: 'rows', n: 60 });
    expect(testOnReadings(vines(2, 1), seededRandom(9)).p).toBeLessThan(0.01);
    const chance = Array.from({ length: 40 }, (_, seed) => testOnReadings(vines(0, seed), seededRandom(seed)).p);
    expect(chance.filter((p) => p <= 0.1).length).toBeLessThanOrEqual(9); // 4 expected, 9 is the 99th percentile of the binomial
  });

  it('are not fooled by rows that differ where most vines of a row lie in one zone', () => {
    const passes = Array.from({ length: 30 }, (_, seed) => {
      const random = seededRandom(seed);
      const rowLevels = Array.from({ length: 6 }, () => 2 * randomNormal(random));
      // Sixteen of the twenty vines of rows 0 to 2 lie in zone 1, of rows 3 to 5 in zone 2; only the row matters for the value.
      const readings = Array.from({ length: 120 }, (_, i) => ({ value: rowLevels[i % 6]! + 0.3 * randomNormal(random), zone: (i < 96) === (i % 6 < 3) ? 1 : 2, row: `${i % 6}` }));
      const { p, anova } = testOnReadings(readings, seededRandom(seed));
      return { within: p <= 0.05, free: anova!.p <= 0.05 };
    });
    expect(passes.filter(({ within }) => within).length).toBeLessThanOrEqual(5); // 1.5 expected, 5 is the 99th percentile of the binomial
    expect(passes.filter(({ free }) => free).length).toBeGreaterThan(10);
  });

  it('are shuffled freely, and say so, when each row lies in one zone', () => {
    expect(testOnReadings(zoned([[1, 2, 3], [7, 8, 9]], [['a', 'a', 'b'], ['c', 'c', 'd']]), seededRandom(1)).shuffle).toBe('free');
  });

  it('agree by name: a measure that does not show the zones is not said to, and one with few readings is not judged', () => {
    const several = judge({ areaM2: 20_000, layerIds: ['a', 'b'], structures: [0.4, 0.5].map((structure) => ({ structure, byDirection: [], isStriped: false })), curve: [{ k: 2, withinShare: 0.2, gap: 1, gapSd: 0.1, separation: 9, holds: 1 }] });
    const check = checkOnFruit([{ measure: 'ph', readings: vines(2, 1) }, { measure: 'brix', readings: vines(0, 3) }, { measure: 'ta', readings: vines(2, 4).slice(0, 20) }], seededRandom(1));
    expect(check.state).toBe('agrees');
    const { verdict, reasons } = withFruit(several, check);
    expect(verdict).toBe('several');
    expect(reasons.filter(({ code }) => code.startsWith('f')).map(({ code, about }) => [code, about])).toEqual([['fruit-agrees', 'ph'], ['fruit-silent', 'brix']]);
  });

  it('take several back to worth testing when enough of them disagree', () => {
    const several = judge({ areaM2: 20_000, layerIds: ['a', 'b'], structures: [0.4, 0.5].map((structure) => ({ structure, byDirection: [], isStriped: false })), curve: [{ k: 2, withinShare: 0.2, gap: 1, gapSd: 0.1, separation: 9, holds: 1 }] });
    const disagrees = checkOnFruit([{ measure: 'brix', readings: vines(0, 3) }], seededRandom(1));
    expect(disagrees.state).toBe('disagrees');
    expect(withFruit(several, disagrees).verdict).toBe('test');
    expect(withFruit(several, checkOnFruit([{ measure: 'brix', readings: vines(2, 1) }], seededRandom(1)))).toMatchObject({ verdict: 'several' });
    const untested = withFruit(several, checkOnFruit([], seededRandom(1)));
    expect(untested).toMatchObject({ verdict: 'several' });
    expect(untested.reasons.map(({ code }) => code)).toContain('not-tested-on-fruit');
    expect(checkOnFruit([{ measure: 'brix', readings: vines(2, 1).slice(0, 20) }], seededRandom(1)).state).toBe('few');
    expect(checkOnFruit([{ measure: 'brix', readings: [] }], seededRandom(1)).state).toBe('untested');
  });

  it('of one zone alone test nothing, and nobody says that there are none', () => {
    const inOne = checkOnFruit([{ measure: 'brix', readings: vines(2, 1).filter(({ zone }) => zone === 1) }], seededRandom(1));
    const result = judge({ areaM2: 20_000, layerIds: [], structures: [], curve: [] });
    expect(withFruit(result, inOne).reasons.map(({ code }) => code)).toEqual(['no-measured-layer', 'readings-in-one-zone']);
  });
});
