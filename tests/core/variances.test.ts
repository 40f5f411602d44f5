import { describe, expect, it } from 'vitest';
import { oneWayAnova } from '../../shared/sampling/anova.ts';
import { ageWeighted, effectiveSampleSize, lagOneCorrelation, pooledVariance, summarise } from '../../shared/sampling/variances.ts';

function expectRelative(actual: number, expected: number, tolerance = 1e-6): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

// NIST Statistical Reference Datasets, univariate summary statistics (https://www.itl.nist.gov/div898/strd/),
// works of the United States government, not under copyright. Certified means, sds and lag-1 autocorrelations.
const alternating = (first: number, low: number, high: number) => [first, ...Array.from({ length: 1000 }, (_, i) => (i % 2 === 0 ? low : high))];
const MAVRO = '180 170 180 190 180 170 150 140 150 150 170 180 180 190 190 210 200 160 140 130 130 150 150 160 150 140 130 140 150 140 150 160 150 160 190 200 200 210 220 230 240 250 270 260 260 260 270 260 250 240'.split(' ').map((k) => 2 + Number(k) * 1e-5);
const MICHELSO = '85 74 90 107 93 85 95 98 98 88 100 98 93 65 76 81 100 100 96 96 96 94 96 94 88 80 85 88 90 84 83 79 81 88 88 83 80 79 76 80 88 88 88 86 72 72 62 86 97 95 88 91 85 87 84 84 85 84 84 84 89 81 81 82 80 77 76 74 75 76 91 92 89 86 88 72 84 85 85 78 89 84 78 81 76 81 79 81 82 85 87 87 81 74 81 94 95 80 81 87'.split(' ').map((k) => 299 + Number(k) / 100);

const LEW = '-213 -564 -35 -15 141 115 -420 -360 203 -338 -431 194 -220 -513 154 -125 -559 92 -21 -579 -52 99 -543 -175 162 -457 -346 204 -300 -474 164 -107 -572 -8 83 -541 -224 180 -420 -374 201 -236 -531 83 27 -564 -112 131 -507 -254 199 -311 -495 143 -46 -579 -90 136 -472 -338 202 -287 -477 169 -124 -568 17 48 -568 -135 162 -430 -422 172 -74 -577 -13 92 -534 -243 194 -355 -465 156 -81 -578 -64 139 -449 -384 193 -198 -538 110 -44 -577 -6 66 -552 -164 161 -460 -344 205 -281 -504 134 -28 -576 -118 156 -437 -381 200 -220 -540 83 11 -568 -160 172 -414 -408 188 -125 -572 -32 139 -492 -321 205 -262 -504 142 -83 -574 0 48 -571 -106 137 -501 -266 190 -391 -406 194 -186 -553 83 -13 -577 -49 103 -515 -280 201 300 -506 131 -45 -578 -80 138 -462 -361 201 -211 -554 32 74 -533 -235 187 -372 -442 182 -147 -566 25 68 -535 -244 194 -351 -463 174 -125 -570 15 72 -550 -190 172 -424 -385 198 -218 -536 96'.split(' ').map(Number);

/** The first digits of pi, 3 first: Machin's formula 16 atan(1/5) − 4 atan(1/239) in whole numbers. */
function digitsOfPi(count: number): number[] {
  const one = 10n ** BigInt(count + 10);
  const arctanOfInverse = (x: bigint): bigint => {
    let [power, sum] = [one / x, one / x];
    for (let k = 1n; power > 0n; k++) {
      power /= x * x;
      sum += (k % 2n === 0n ? power : -power) / (2n * k + 1n);
    }
    return sum;
  };
  const pi = 16n * arctanOfInverse(5n) - 4n * arctanOfInverse(239n);
  return [...pi.toString().slice(0, count)].map(Number);
}

describe('mean and standard deviation of the NIST reference sets', () => {
  const sets: readonly (readonly [string, number[], { mean: number; sd: number; lag: number; tolerance: number }])[] = [
    ['NumAcc1', [10000001, 10000003, 10000002], { mean: 10000002, sd: 1, lag: -0.5, tolerance: 1e-15 }],
    ['NumAcc2', alternating(1.2, 1.1, 1.3), { mean: 1.2, sd: 0.1, lag: -0.999, tolerance: 1e-13 }],
    ['NumAcc3', alternating(1000000.2, 1000000.1, 1000000.3), { mean: 1000000.2, sd: 0.1, lag: -0.999, tolerance: 1e-9 }],
    ['NumAcc4', alternating(10000000.2, 10000000.1, 10000000.3), { mean: 10000000.2, sd: 0.1, lag: -0.999, tolerance: 1e-7 }],
    ['Mavro', MAVRO, { mean: 2.001856, sd: 0.000429123454003053, lag: 0.937989183438248, tolerance: 1e-11 }],
    ['Michelso', MICHELSO, { mean: 299.8524, sd: 0.0790105478190518, lag: 0.535199668621283, tolerance: 1e-11 }],
    // The archive's file has a 3 where the 957th digit of pi is an 8; the certified values are those of the file.
    ['PiDigits', digitsOfPi(5000).with(956, 3), { mean: 4.5348, sd: 2.86733906028871, lag: -0.00355099287237972, tolerance: 1e-13 }],
    ['Lew', LEW, { mean: -177.435, sd: 277.332168044316, lag: -0.307304800605679, tolerance: 1e-13 }],
  ];

  for (const [name, values, certified] of sets)
    it(`${name} comes out as certified`, () => {
      const { mean, sd } = summarise(values);
      expectRelative(mean, certified.mean, 1e-14);
      expectRelative(sd, certified.sd, certified.tolerance);
      expectRelative(lagOneCorrelation(values), certified.lag, Math.max(certified.tolerance, 1e-11));
    });

  it('a set with few readings has no spread rather than a spread of 0', () => {
    expect(summarise([]).mean).toBeNaN();
    expect(summarise([7])).toMatchObject({ n: 1, mean: 7 });
    expect(summarise([7]).sd).toBeNaN();
  });
});

describe('effective sample size along a line', () => {
  it('gives the book example', () => {
    expectRelative(effectiveSampleSize(10, 0.26), 6.2199, 1e-6); // Cressie 1993 §1.3 prints 6.2 (from memory), recomputed
    expect(effectiveSampleSize(25, 0)).toBe(25);
  });

  it('shows why 100 consecutive readings of the speed of light say as much as about 30', () => {
    const worth = effectiveSampleSize(100, lagOneCorrelation(MICHELSO));
    expect(worth).toBeGreaterThan(29);
    expect(worth).toBeLessThan(32);
  });
});

describe('pooled variance', () => {
  it('weighs by degrees of freedom', () => {
    // R 4.2.2
    const first = pooledVariance([{ variance: 1.21, df: 7 }, { variance: 0.64, df: 4 }, { variance: 2.25, df: 11 }]);
    expectRelative(first.variance, 1.626363636, 1e-9);
    expectRelative(Math.sqrt(first.variance), 1.275289628, 1e-9);
    expect(first.df).toBe(22);
    const second = pooledVariance([{ variance: 0.0144, df: 3 }, { variance: 0.0225, df: 5 }, { variance: 0.0081, df: 4 }, { variance: 0.0196, df: 2 }]);
    expectRelative(second.variance, 0.016235714, 4e-8);
    expectRelative(Math.sqrt(second.variance), 0.127419442, 1e-8);
    expect(second.df).toBe(14);
    const third = pooledVariance([{ variance: 1.21, df: 9 }, { variance: 0.9, df: 7 }, { variance: 1.69, df: 11 }, { variance: 2.1, df: 5 }]);
    expectRelative(third.variance, 1.44625, 1e-12);
    expect(third.df).toBe(32);
  });

  it('leaves out groups of one reading and says when nothing is left', () => {
    expect(pooledVariance([{ variance: Number.NaN, df: 0 }, { variance: 2, df: 3 }])).toEqual({ variance: 2, df: 3 });
    expect(pooledVariance([])).toEqual({ variance: Number.NaN, df: 0 });
  });

  it('lets an older season keep its variance but not its weight', () => {
    const aged = ageWeighted({ variance: 2, df: 10 }, 2);
    expect(aged.variance).toBe(2);
    expectRelative(aged.df, 4.9, 1e-12); // 10 · 0.7²
    expect(() => ageWeighted({ variance: 1, df: 1 }, -1)).toThrow('newer than the season');
  });
});

describe('one-way analysis of variance', () => {
  // NIST StRD SiRstv: five instruments, resistance in ohm·cm, certified values
  const siRstv = [
    [196.3052, 196.124, 196.189, 196.2569, 196.3403],
    [196.3042, 196.3825, 196.1669, 196.3257, 196.0422],
    [196.1303, 196.2005, 196.2889, 196.0343, 196.1811],
    [196.2795, 196.1748, 196.1494, 196.1485, 195.9885],
    [196.2119, 196.1051, 196.185, 196.0052, 196.209],
  ];

  it('reproduces the certified values of SiRstv', () => {
    const result = oneWayAnova(siRstv);
    expectRelative(result.ssBetween, 5.11462616e-2, 1e-11);
    expect(result.dfBetween).toBe(4);
    expectRelative(result.msBetween, 1.27865654e-2, 1e-11);
    expectRelative(result.ssWithin, 2.1663656e-1, 1e-11);
    expect(result.dfWithin).toBe(20);
    expectRelative(result.msWithin, 1.0831828e-2, 1e-11);
    expectRelative(result.f, 1.18046237440255, 1e-11);
    expectRelative(result.rSquared, 0.190999039051129, 1e-11);
    expectRelative(Math.sqrt(result.msWithin), 0.104076068334656, 1e-11);
    // R 4.2.2
    expectRelative(result.p, 0.349447, 2e-6);
    expectRelative(result.betweenComponent, 0.00039094748, 1e-8);
    expectRelative(result.intraClass, 0.0348351868, 1e-8);
  });

  it('loses nothing to thirteen shared leading digits but what the numbers themselves have lost', () => {
    // NIST StRD SmLs01, SmLs04, SmLs07: nine treatments of 21; 1, 7 and 13 constant leading digits, the same certified answers
    const centres = [0.4, 0.3, 0.5, 0.3, 0.5, 0.3, 0.5, 0.3, 0.5];
    const generated = (leading: number) =>
      centres.map((centre) => Array.from({ length: 21 }, (_, i) => Number((leading + centre + (i === 0 ? 0 : i % 2 === 1 ? -0.1 : 0.1)).toFixed(1))));
    expect(generated(1)[0]!.slice(0, 3)).toEqual([1.4, 1.3, 1.5]);
    const sets = [[1, 1e-12], [1e6, 1e-8], [1e12, 1e-2]] as const;
    for (const [leading, tolerance] of sets) {
      const result = oneWayAnova(generated(leading));
      expectRelative(result.ssBetween, 1.68, tolerance);
      expectRelative(result.ssWithin, 1.8, tolerance);
      expectRelative(result.f, 21, tolerance);
      expectRelative(result.rSquared, 0.482758620689655, tolerance);
      expect([result.dfBetween, result.dfWithin]).toEqual([8, 180]);
    }
  });

  it('reproduces the certified values of AtmWtAg', () => {
    // NIST StRD AtmWtAg: atomic weight of silver, two instruments of 24; certified values; numbers are units of 1e-7 above 107.868
    const first = [1568, 1465, 1572, 1785, 1446, 1903, 1526, 1494, 1616, 1587, 1519, 1486, 1419, 1569, 1508, 1672, 1385, 1518, 1662, 1424, 1360, 1333, 1610, 1477];
    const second = [1079, 1344, 1513, 1197, 1604, 1385, 1642, 1365, 1151, 1082, 1517, 1448, 1198, 1482, 1334, 1609, 1101, 1512, 1469, 1360, 1254, 1261, 1450, 1368];
    const weights = [first, second].map((group) => group.map((k) => Number(`107.868${k}`)));
    const result = oneWayAnova(weights);
    expectRelative(result.ssBetween, 3.638341875e-9, 1e-7);
    expectRelative(result.ssWithin, 1.04951729166667e-8, 1e-7);
    expectRelative(result.f, 15.9467335677930, 1e-7);
    expectRelative(result.rSquared, 0.257426544538321, 1e-7);
  });

  it('tells whether three zones differ in sugar', () => {
    // R 4.2.2
    const zones = [[21.0, 21.4, 20.8, 21.9, 21.2], [22.5, 22.9, 23.1, 22.2, 22.8], [24.0, 23.6, 24.4, 23.9]];
    const result = oneWayAnova(zones);
    expectRelative(result.ssBetween + result.ssWithin, 18.095, 1e-9);
    expectRelative(result.ssWithin, 1.5395, 1e-9);
    expectRelative(result.rSquared, 0.914921249, 1e-8);
    expectRelative(result.adjustedRSquared, 0.899452385, 1e-8);
    expectRelative(result.f, 59.145989, 1e-7);
    expectRelative(result.p, 1.3002e-6, 1e-4);
    expectRelative(result.omegaSquared, 0.892549025, 1e-8);
    expectRelative(result.typicalSize, 4.642857, 1e-6);
    expectRelative(result.betweenComponent, 1.752755944, 1e-8);
    expectRelative(result.intraClass, 0.926056021, 1e-8);
  });

  it('says what is missing when there is nothing to compare', () => {
    expect(() => oneWayAnova([[1, 2, 3], []])).toThrow('at least 2 groups');
    expect(() => oneWayAnova([[1], [2]])).toThrow('more readings than groups');
  });
});
