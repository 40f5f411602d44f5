import { describe, expect, it } from 'vitest';
import { type Random, seededRandom, shuffled } from '../../shared/analysis/random.ts';
import { sampleSpread } from '../../shared/sampling/balance.ts';
import { localPivotal, type Units } from '../../shared/sampling/pivotal.ts';
import { systematicPlaces, systematicStart } from '../../shared/sampling/systematic.ts';

function streamOf(numbers: readonly number[]): { random: Random; used: () => number } {
  let at = 0;
  return {
    random: () => {
      if (at >= numbers.length) throw new Error('the stream is used up');
      return numbers[at++]!;
    },
    used: () => at,
  };
}

/** The method as it is written in the paper: every rival looked at, every undecided unit listed. */
function plainPivotal(units: Units, random: Random): { chosen: number[]; pairs: [number, number][] } {
  const p = Array.from(units.p);
  const pairs: [number, number][] = [];
  const undecided = () => [...p.keys()].filter((unit) => p[unit]! > 1e-9 && p[unit]! < 1 - 1e-9);
  for (let live = undecided(); live.length > 1; live = undecided()) {
    const i = live[Math.floor(random() * live.length)]!;
    let j = -1;
    let least = Infinity;
    for (const other of live) {
      const square = (units.x[other]! - units.x[i]!) ** 2 + (units.y[other]! - units.y[i]!) ** 2;
      if (other !== i && square < least) [j, least] = [other, square];
    }
    const [pi, pj, draw] = [p[i]!, p[j]!, random()];
    const sum = pi + pj;
    if (sum < 1 - 1e-9) [p[i], p[j]] = draw < pj / sum ? [0, sum] : [sum, 0];
    else [p[i], p[j]] = draw < (1 - pj) / (2 - sum) ? [1, sum - 1] : [sum - 1, 1];
    pairs.push([i, j]);
  }
  for (const last of undecided()) p[last] = random() < p[last]! ? 1 : 0;
  return { chosen: [...p.keys()].filter((unit) => p[unit]! > 0.5), pairs };
}

const grid3x4 = { x: Array.from({ length: 12 }, (_, i) => 2.5 * Math.floor(i / 4)), y: Array.from({ length: 12 }, (_, i) => 1.5 * (i % 4)) };
const firstTen = { x: grid3x4.x.slice(0, 10), y: grid3x4.y.slice(0, 10) };
const line = { x: [0, 1, 2, 4, 7], y: [0, 0, 0, 0, 0] };

// Streams, pairs and samples: worked in a Python prototype of the published method.
describe('local pivotal method', () => {
  const cases = [
    {
      name: '3 × 4 vines, p 0.25', units: { ...grid3x4, p: Array(12).fill(0.25) as number[] },
      stream: [0.13, 0.85, 0.76, 0.26, 0.5, 0.45, 0.65, 0.79, 0.09, 0.03, 0.84, 0.43, 0.76, 0, 0.45, 0.72, 0.23, 0.95, 0.9, 0.03],
      chosen: [4, 5, 11], pairs: [[1, 0], [9, 8], [6, 5], [7, 3], [1, 2], [10, 11], [8, 4], [5, 4], [2, 5], [11, 7]], balance: 0.125,
    },
    {
      name: 'ten vines, p 0.4', units: { ...firstTen, p: Array(10).fill(0.4) as number[] },
      stream: [0.96, 0.95, 0.06, 0.08, 0.84, 0.74, 0.67, 0.31, 0.61, 0.61, 0.58, 0.16, 0.43, 0.39, 0.72, 0.99, 0.95, 0.54],
      chosen: [1, 2, 4, 7], pairs: null, balance: 0.12,
    },
    {
      name: 'five units on a line with unequal p', units: { ...line, p: [0.2, 0.5, 0.8, 0.6, 0.9] },
      stream: [0.24, 0.54, 0.37, 0.6, 0.63, 0.07, 0.01, 0.84],
      chosen: [2, 3, 4], pairs: [[1, 0], [2, 1], [3, 1], [1, 4]], balance: null,
    },
  ];

  it.each(cases)('$name: the stated stream gives the stated sample', ({ units, stream, chosen, pairs, balance }) => {
    const fast = streamOf(stream);
    expect(localPivotal(units, fast.random)).toEqual(chosen);
    expect(fast.used()).toBe(stream.length);
    const plain = plainPivotal(units, streamOf(stream).random);
    expect(plain.chosen).toEqual(chosen);
    if (pairs !== null) expect(plain.pairs).toEqual(pairs);
    if (balance !== null) expect(sampleSpread(units, chosen).balance).toBeCloseTo(balance, 12);
  });

  it('gives the same sample as the plain form, on regular and on scattered vines, equal and unequal p', () => {
    for (let seed = 1; seed <= 60; seed++) {
      const random = seededRandom(seed);
      const count = 2 + Math.floor(random() * 250);
      const units = {
        x: Float64Array.from({ length: count }, (_, i) => (seed % 2 === 0 ? 25 * Math.floor(i / 12) : Math.floor(random() * 1e5))),
        y: Float64Array.from({ length: count }, (_, i) => (seed % 2 === 0 ? 15 * (i % 12) : Math.floor(random() * 1e5))),
        p: Float64Array.from({ length: count }, () => (seed % 3 === 0 ? random() : 12 / (count + 12))),
      };
      expect(localPivotal(units, seededRandom(1000 + seed))).toEqual(plainPivotal(units, seededRandom(1000 + seed)).chosen);
    }
  });

  it('units that are certain or impossible need no draw', () => {
    expect(localPivotal({ x: [0, 1, 2], y: [0, 0, 0], p: [1, 0, 1] }, streamOf([]).random)).toEqual([0, 2]);
    expect(localPivotal({ x: [], y: [], p: [] }, streamOf([]).random)).toEqual([]);
  });

  it('a last undecided unit is taken when a further draw is below its probability', () => {
    const one = { x: [0], y: [0], p: [0.3] };
    expect(localPivotal(one, streamOf([0.29]).random)).toEqual([0]);
    expect(localPivotal(one, streamOf([0.3]).random)).toEqual([]);
  });
});

const block = { x: Array.from({ length: 60 }, (_, i) => 2.5 * Math.floor(i / 10)), y: Array.from({ length: 60 }, (_, i) => 1.5 * (i % 10)), p: Array(60).fill(0.2) as number[] };

describe('over many seeds', () => {
  it('always 12 different vines, and each vine as often as its chance says, within 4 binomial standard deviations of 10 000 draws', () => {
    const times = new Float64Array(60);
    for (let seed = 0; seed < 10_000; seed++) {
      const chosen = localPivotal(block, seededRandom(seed));
      expect(new Set(chosen).size).toBe(12);
      for (const unit of chosen) times[unit]! += 1;
    }
    const sd = Math.sqrt(10_000 * 0.2 * 0.8);
    for (const count of times) expect(Math.abs(count - 2000)).toBeLessThan(4 * sd);
  });

  it('keeps unequal chances', () => {
    const p = [0.1, 0.9, 0.3, 0.7, 0.5, 0.5, 0.25, 0.75, 0.6, 0.4];
    const times = new Float64Array(10);
    for (let seed = 0; seed < 10_000; seed++) for (const unit of localPivotal({ ...firstTen, p }, seededRandom(seed))) times[unit]! += 1;
    p.forEach((chance, unit) => expect(Math.abs(times[unit]! - 10_000 * chance)).toBeLessThan(4 * Math.sqrt(10_000 * chance * (1 - chance))));
  });

  // Means of 2 000 draws in Python: 0.085, 0.017, 0.250 and 4.72, 4.36, 6.59 m²; the tolerances are about four standard errors of 1 000 draws here.
  it('is better balanced and nearer to every vine than a simple random sample', () => {
    const order = Array.from({ length: 60 }, (_, i) => (Math.floor(i / 10) % 2 === 0 ? i : 10 * Math.floor(i / 10) + 9 - (i % 10)));
    const means = (draw: (random: Random) => number[]) => {
      let balance = 0;
      let square = 0;
      for (let seed = 0; seed < 1000; seed++) {
        const spread = sampleSpread(block, draw(seededRandom(seed)));
        balance += spread.balance / 1000;
        square += spread.meanSquaredDistanceM2 / 1000;
      }
      return { balance, square };
    };
    const pivotal = means((random) => localPivotal(block, random));
    const systematic = means((random) => systematicPlaces(60, 12, systematicStart(60, 12, random)).map((place) => order[place - 1]!));
    const simple = means((random) => shuffled([...block.x.keys()], random).slice(0, 12));
    expect(pivotal.balance).toBeGreaterThan(0.08);
    expect(pivotal.balance).toBeLessThan(0.09);
    expect(systematic.balance).toBeLessThan(0.03);
    expect(Math.abs(simple.balance - 0.25)).toBeLessThan(0.02);
    expect(Math.abs(pivotal.square - 4.72)).toBeLessThan(0.1);
    expect(Math.abs(systematic.square - 4.36)).toBeLessThan(0.1);
    expect(Math.abs(simple.square - 6.59)).toBeLessThan(0.3);
  });
});

describe('balance of a sample', () => {
  const grid = { x: Array.from({ length: 16 }, (_, i) => 1 + (i % 4)), y: Array.from({ length: 16 }, (_, i) => 1 + Math.floor(i / 4)), p: Array(16).fill(0.25) as number[] };
  const at = (...places: [number, number][]) => places.map(([x, y]) => 4 * (y - 1) + x - 1);

  // computed in R 4.2.2
  it.each([
    [at([1, 1], [2, 1], [1, 2], [2, 2]), 0.5625],
    [at([1, 1], [3, 1], [1, 3], [3, 3]), 0.12890625],
    [at([1, 1], [4, 1], [1, 4], [4, 4]), 0],
    [at([1, 1], [2, 1], [3, 1], [4, 1]), 0],
  ])('sample %j has balance %d', (sample, balance) => {
    expect(sampleSpread(grid, sample).balance).toBeCloseTo(balance, 12);
  });

  it('four vines in one row look balanced, but lie far from the rest', () => {
    expect(sampleSpread(grid, at([1, 1], [2, 1], [3, 1], [4, 1])).meanSquaredDistanceM2).toBeCloseTo(3.5, 12);
  });
});
