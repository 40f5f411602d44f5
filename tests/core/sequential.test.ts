import { describe, expect, it } from 'vitest';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { addReading, checkStopping, NO_READINGS, summariseSums, sumsOf, type StoppingRule } from '../../shared/sampling/sequential.ts';
import { summarise } from '../../shared/sampling/variances.ts';

function expectRelative(actual: number, expected: number, tolerance = 1e-6): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

/** Readings with exactly this number, mean 22 and sample sd. */
function exactly(n: number, sd: number): number[] {
  const ranks = Array.from({ length: n }, (_, i) => i - (n - 1) / 2);
  const unit = Math.sqrt(ranks.reduce((sum, rank) => sum + rank * rank, 0) / (n - 1));
  return ranks.map((rank) => 22 + (rank * sd) / unit);
}

const HALF: StoppingRule = { margin: { kind: 'absolute', value: 0.5 }, confidence: 0.95, randomOrder: true };
const SEQUENCE = [22.1, 23.4, 21.8, 24.0, 22.9, 23.1, 22.2, 24.3, 21.5, 23.0, 22.7, 23.6, 22.4, 23.9, 22.0, 23.3];

describe('running sums', () => {
  it('agree with the two-pass formulas, whatever digits the readings share', () => {
    for (const offset of [0, 1e6, -300]) {
      const values = SEQUENCE.map((value) => value + offset);
      const running = summariseSums(sumsOf(values));
      const whole = summarise(values);
      expectRelative(running.mean, whole.mean, 1e-12);
      expectRelative(running.sd, whole.sd, 1e-7);
    }
  });

  it('give the moment skewness', () => {
    // scipy 1.17.1: scipy.stats.skew([1, 2, 2, 3, 9])
    expectRelative(summariseSums(sumsOf([1, 2, 2, 3, 9])).skewness, 1.321086967875271, 1e-12);
    expect(summariseSums(sumsOf([5, 5, 5])).skewness).toBe(0);
    expect(summariseSums(NO_READINGS).mean).toBeNaN();
  });

  it('never change the sums they are given', () => {
    const before = Object.freeze(sumsOf([1, 2]));
    expect(addReading(before, 3).n).toBe(3);
    expect(before.n).toBe(2);
  });
});

describe('stopping rule', () => {
  it('gives the left sides of the worked cases', () => {
    // Worked independently in Python from the formula
    const left = (n: number, sd: number, rule: StoppingRule) => checkStopping(sumsOf(exactly(n, sd)), rule);
    expectRelative(left(10, 1, HALF).leftSide, 0.665256, 4e-6);
    expect(left(10, 1, HALF).decision).toBe('goOn');
    expectRelative(left(20, 1, HALF).leftSide, 0.251893, 4e-6);
    expect(left(20, 1, HALF).decision).toBe('goOn');
    expectRelative(left(21, 1, HALF).leftSide, 0.236802, 4e-6);
    expect(left(21, 1, HALF).decision).toBe('enough');
    const small = { ...HALF, populationSize: 100 };
    expectRelative(left(16, 1, small).leftSide, 0.283232, 4e-6);
    expectRelative(left(17, 1, small).leftSide, 0.258133, 4e-6);
    expectRelative(left(18, 1, small).leftSide, 0.23658, 4e-6);
    expect([16, 17, 18].map((n) => left(n, 1, small).decision)).toEqual(['goOn', 'goOn', 'enough']);
    const strict = left(12, 0.9, { ...HALF, confidence: 0.99 });
    expectRelative(strict.leftSide, 0.813884, 4e-6);
    expect(strict.decision).toBe('goOn');
    const loose = left(10, 0.35, { ...HALF, confidence: 0.9, margin: { kind: 'absolute', value: 0.3 } });
    expectRelative(loose.leftSide, 0.053513, 1e-5);
    expect(loose).toMatchObject({ decision: 'enough' });
  });

  it('allows for the step of the instrument when all readings are equal', () => {
    const state = checkStopping(sumsOf(Array<number>(10).fill(22.4)), { ...HALF, margin: { kind: 'absolute', value: 0.05 }, resolution: 0.2 });
    expectRelative(state.leftSide, 0.002218, 3e-4);
    expect(state).toMatchObject({ decision: 'enough', mean: 22.4 });
  });

  it('stops the worked sequence at its sixteenth reading', () => {
    const expected = [0.570716, 0.44439, 0.380605, 0.318815, 0.297178, 0.271696, 0.23642];
    let sums = NO_READINGS;
    SEQUENCE.forEach((value, i) => {
      sums = addReading(sums, value);
      const state = checkStopping(sums, HALF);
      if (i < 9) expect(state.decision).toBe('tooFewYet');
      else {
        expectRelative(state.leftSide, expected[i - 9]!, 3e-6);
        expect(state.decision).toBe(i < 15 ? 'goOn' : 'enough');
      }
    });
    const last = summariseSums(sums);
    expectRelative(last.mean, 22.8875, 1e-12);
    expectRelative(last.sd, 0.83736, 1e-5);
  });

  it('does not look before ten readings, fifteen where skewed, five at the very least', () => {
    const calm = exactly(9, 0.01);
    expect(checkStopping(sumsOf(calm), HALF).decision).toBe('tooFewYet');
    expect(checkStopping(sumsOf(exactly(14, 0.01)), { ...HALF, skewed: true }).decision).toBe('tooFewYet');
    expect(checkStopping(sumsOf(exactly(15, 0.01)), { ...HALF, skewed: true }).decision).toBe('enough');
    expect(checkStopping(sumsOf(exactly(4, 0.01)), { ...HALF, minimum: 2 }).decision).toBe('tooFewYet');
    expect(checkStopping(sumsOf(exactly(5, 0.01)), { ...HALF, minimum: 2 }).decision).toBe('enough');
  });

  it('asks for more where the readings lean to the right', () => {
    const lean = [...exactly(18, 0.6), 26, 27];
    const plain = checkStopping(sumsOf(lean), HALF);
    const skewed = checkStopping(sumsOf(lean), { ...HALF, skewed: true });
    const { skewness } = summariseSums(sumsOf(lean));
    expectRelative(skewed.leftSide / plain.leftSide, (1 + (3 + 8 * skewness ** 2) / 20) / (1 + 3 / 20), 1e-12);
    expect(skewness).toBeGreaterThan(1);
    // Without a lean, or with one to the left, a skewed measure is still not trusted further than a skewness of 1
    const left = lean.map((value) => -value);
    expectRelative(checkStopping(sumsOf(left), { ...HALF, skewed: true }).leftSide / plain.leftSide, (1 + 11 / 20) / (1 + 3 / 20), 1e-12);
  });

  it('is offered only for vines in random order, and ends when every vine is read', () => {
    expect(checkStopping(sumsOf(exactly(30, 0.1)), { ...HALF, randomOrder: false }).decision).toBe('orderNotRandom');
    expect(checkStopping(sumsOf(exactly(30, 9)), { ...HALF, populationSize: 30 })).toMatchObject({ decision: 'everyVineRead', more: 0 });
  });

  it('takes a relative margin from the mean so far', () => {
    const state = checkStopping(sumsOf(exactly(21, 1)), { ...HALF, margin: { kind: 'relative', value: 0.5 / 22 } });
    expectRelative(state.margin, 0.5, 1e-12);
    expect(state.decision).toBe('enough');
  });

  it('predicts how many more, and the prediction is where the rule holds if the spread stays', () => {
    const state = checkStopping(sumsOf(exactly(17, 1)), HALF);
    expect(state.more).toBe(4); // 21 in all: left side 0.236802 there, 0.251893 at 20
    expect(checkStopping(sumsOf(exactly(21, 1)), HALF).more).toBe(0);
    expect(checkStopping(sumsOf(exactly(4, 0.01)), HALF).more).toBe(6);
    expect(checkStopping(sumsOf([22, 23]), HALF).more).toBeNull();
    expect(checkStopping(sumsOf(exactly(8, 50)), { ...HALF, populationSize: 60 }).more).toBe(52);
  });

  it('covers at its nominal rate on normal fruit', () => {
    const random = seededRandom(77);
    const seasons = 4000;
    let covered = 0;
    let readings = 0;
    for (let season = 0; season < seasons; season++) {
      let sums = NO_READINGS;
      for (let n = 1; ; n++) {
        sums = addReading(sums, randomNormal(random));
        if (n >= 10 && checkStopping(sums, { ...HALF, margin: { kind: 'absolute', value: 1.959964 / Math.sqrt(25) } }).decision === 'enough') break;
      }
      readings += sums.n;
      if (Math.abs(summariseSums(sums).mean) <= 1.959964 / 5) covered += 1;
    }
    // Earlier simulation of the same rule in Python (20 000 seasons): 95.5 %, 28.8 readings; binomial sd here 0.0033
    expect(covered / seasons).toBeGreaterThan(0.945);
    expect(readings / seasons).toBeGreaterThan(27.8);
    expect(readings / seasons).toBeLessThan(29.8);
  });
});
