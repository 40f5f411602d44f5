import { describe, expect, it } from 'vitest';
import { seededRandom } from '../../shared/analysis/random.ts';
import { allocationVariance, costShares, costSharesForBudget, costTotal, neymanShares, neymanTotal, proportionalShares, proportionalTotal, targetVariance, type AllocationZone } from '../../shared/sampling/allocate.ts';
import { exactCounts, nearestCounts } from '../../shared/sampling/wholeCounts.ts';
import { allocationMethod, allocationMethods } from '../../shared/sampling/allocationMethods.ts';
import { blockPrecision, blockSampleSize } from '../../shared/sampling/blockSampleSize.ts';
import { leastCostCounts } from '../../shared/sampling/leastCost.ts';
import { criticalZ } from '../../shared/sampling/quantiles.ts';
import { everyZoneCounts, leastCostForAll, trimToVisited, type MeasureDemand, type SharedZone } from '../../shared/sampling/severalMeasures.ts';

function expectRelative(actual: number, expected: number, tolerance = 1e-6): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

function expectAll(actual: readonly number[], expected: readonly number[], tolerance = 1e-6): void {
  expect(actual).toHaveLength(expected.length);
  actual.forEach((value, i) => expectRelative(value, expected[i]!, tolerance));
}

const ZONES = [{ vines: 900, sd: 1.1 }, { vines: 600, sd: 0.8 }, { vines: 300, sd: 1.5 }];
const sum = (values: readonly number[]) => values.reduce((total, value) => total + value, 0);

describe('sharing a total between zones', () => {
  it("reproduces the variances of Cochran's 64 cities", () => {
    // Cochran 1977 ch. 5 (inputs from memory), computed with R 4.2.2; variances of the estimated total
    const cities = [{ vines: 16, sd: Math.sqrt(53843) }, { vines: 48, sd: Math.sqrt(5581) }];
    const ofTotal = (counts: number[]) => allocationVariance(cities, counts) * 64 ** 2;
    expectRelative(ofTotal([6, 18]), 1882293, 1e-6);
    expectRelative(Math.sqrt(ofTotal([6, 18])), 1371.97, 1e-5);
    expectRelative(ofTotal([12, 12]), 1090827, 1e-6);
    expectRelative(Math.sqrt(ofTotal([12, 12])), 1044.43, 1e-5);
    expectRelative(allocationVariance([{ vines: 64, sd: Math.sqrt(52448) }], [24]) * 64 ** 2, 5594453, 1e-6);
    expect(proportionalShares(cities, 24)).toEqual([6, 18]);
    expectAll(neymanShares(cities, 24), [12.2084, 11.7916], 1e-5);
    expectRelative(ofTotal(neymanShares(cities, 24)), 1090157, 1e-6);
  });

  it('shares by spread and cost as in a published exercise', () => {
    // Inputs: studylib.net/doc/5858608; computed with R 4.2.2
    const strata = [{ vines: 1550, sd: 5, cost: 9 }, { vines: 620, sd: 15, cost: 9 }, { vines: 930, sd: 10, cost: 16 }];
    expectAll(costShares(strata, 58), [18.7097, 22.4516, 16.8387], 1e-5);
    expect(costShares(strata, 58).map(Math.round)).toEqual([19, 22, 17]);
    expectAll(neymanShares(strata, 58), [17.0588, 20.4706, 20.4706], 1e-5);
    expectAll(proportionalShares(strata, 58), [29, 11.6, 17.4], 1e-12);
  });

  it('finds the exact whole numbers for three zones', () => {
    // R 4.2.2, all integer triples enumerated
    expect(proportionalShares(ZONES, 30)).toEqual([15, 10, 5]);
    expectAll(neymanShares(ZONES, 30), [15.46875, 7.5, 7.03125], 1e-12);
    expect(exactCounts(ZONES, 30)).toEqual([15, 8, 7]);
    expectRelative(allocationVariance(ZONES, [15, 8, 7]), 0.037321164, 1e-8);
    expectRelative(allocationVariance(ZONES, [15, 10, 5]), 0.0391148148, 1e-8);
  });

  it('allows for costs, for a total and for a budget', () => {
    // R 4.2.2
    const priced = ZONES.map((zone, i) => ({ ...zone, cost: [2, 2, 5][i]! }));
    expectAll(costShares(priced, 30), [16.926887, 8.206975, 4.866138], 1e-6);
    expectAll(costSharesForBudget(priced, 90), [20.421611, 9.901387, 5.870801], 1e-6);
    expectRelative(sum(costSharesForBudget(priced, 90).map((n, i) => n * priced[i]!.cost)), 90, 1e-12);
  });

  it('gives the least total for a margin of 0.4 at 95 %', () => {
    // R 4.2.2
    const variance = targetVariance(0.4, criticalZ(0.95));
    expectRelative(variance, 0.0416508435, 1e-8);
    expectRelative(neymanTotal(ZONES, variance), 26.889043, 1e-7);
    expectAll(neymanShares(ZONES, neymanTotal(ZONES, variance)), [13.8647, 6.7223, 6.3021], 1e-5);
    expectRelative(proportionalTotal(ZONES, variance).uncorrected, 28.65088, 1e-6);
    expectRelative(proportionalTotal(ZONES, variance).total, 28.201985, 1e-7);
    expectRelative(costTotal(ZONES, variance), neymanTotal(ZONES, variance), 1e-12);
  });

  it('beats or equals every other sharing of the same total, bounds included', () => {
    const random = seededRandom(5);
    for (let trial = 0; trial < 40; trial++) {
      const zones: AllocationZone[] = Array.from({ length: 3 }, () => ({ vines: 6 + Math.floor(random() * 30), sd: 0.2 + 2 * random(), minimum: 2, maximum: 4 + Math.floor(random() * 10) }));
      const total = 9 + Math.floor(random() * 3);
      const best = allocationVariance(zones, exactCounts(zones, total));
      for (let a = 2; a <= total; a++)
        for (let b = 2; a + b <= total - 2; b++) {
          const counts = [a, b, total - a - b];
          if (counts.some((n, i) => n > Math.min(zones[i]!.maximum!, zones[i]!.vines))) continue;
          expect(best).toBeLessThanOrEqual(allocationVariance(zones, counts) * (1 + 1e-12));
        }
    }
  });

  it('keeps minimum, maximum and total whatever the method', () => {
    const zones = [{ vines: 1000, sd: 1 }, { vines: 4, sd: 9 }, { vines: 60, sd: 0 }];
    for (const method of allocationMethods) {
      const counts = method.counts(zones, 40);
      expect(sum(counts)).toBe(40);
      counts.forEach((n, i) => {
        expect(n).toBeGreaterThanOrEqual(2);
        expect(n).toBeLessThanOrEqual(zones[i]!.vines);
      });
    }
    expect(sum(allocationMethod('spread').counts(zones, 5000))).toBe(1064);
  });

  it('gives most samples at once and ends where one by one would', () => {
    const random = seededRandom(17);
    const oneByOne = (zones: readonly AllocationZone[], total: number, worth: (i: number, n: number) => number) => {
      const counts = zones.map(({ minimum = 2, maximum, vines }) => Math.min(minimum, maximum ?? vines, vines));
      while (sum(counts) < total) {
        const open = zones.map((_, i) => i).filter((i) => counts[i]! < Math.min(zones[i]!.maximum ?? zones[i]!.vines, zones[i]!.vines));
        if (open.length === 0) break;
        counts[open.reduce((best, i) => (worth(i, counts[i]!) > worth(best, counts[best]!) ? i : best))]! += 1;
      }
      return counts;
    };
    for (let trial = 0; trial < 150; trial++) {
      // Alike zones make ties, zones without spread and tight limits make corners.
      const alike = trial % 5 === 0;
      const zones: AllocationZone[] = Array.from({ length: 1 + (trial % 12) }, (_, i) => ({
        vines: alike ? 200 : 3 + Math.floor(random() ** 3 * 900), sd: alike ? 1 : i % 7 === 6 ? 0 : 10 ** (2 * random() - 1), cost: alike ? 30 : 10 + 300 * random(),
        minimum: Math.floor(random() * 6), ...(random() < 0.3 ? { maximum: 2 + Math.floor(random() * 200) } : {}),
      }));
      const least = sum(zones.map(({ minimum = 2, maximum, vines }) => Math.min(minimum, maximum ?? vines, vines)));
      const total = least + Math.floor(random() * 700);
      const shares = zones.map(({ vines }) => (total * vines) / sum(zones.map((zone) => zone.vines)));
      const gain = (i: number, n: number) => (n === 0 ? Infinity : (zones[i]!.vines * zones[i]!.sd) ** 2 / (n * (n + 1)));
      expect(exactCounts(zones, total)).toEqual(oneByOne(zones, total, gain));
      expect(exactCounts(zones, total, { byCost: true })).toEqual(oneByOne(zones, total, (i, n) => gain(i, n) / zones[i]!.cost!));
      expect(nearestCounts(zones, shares, total)).toEqual(oneByOne(zones, total, (i, n) => shares[i]! - n));
    }
  });

  it('says what the minimum costs instead of raising the total', () => {
    expect(() => exactCounts(Array.from({ length: 8 }, () => ({ vines: 100, sd: 1 })), 12)).toThrow('8 zones need at least 16 samples');
  });
});

describe('count for the mean of a block', () => {
  it('is the first total that fits', () => {
    for (const { id } of allocationMethods)
      for (const factor of ['t', 'z'] as const) {
        const answer = blockSampleSize({ zones: ZONES, margin: 0.4, confidence: 0.95, method: id, factor });
        expect(answer.reached).toBe(true);
        expect(answer.halfWidth).toBeLessThanOrEqual(0.4);
        const fewer = blockPrecision(ZONES, allocationMethod(id).counts(ZONES, answer.total - 1), { confidence: 0.95, factor });
        expect(fewer.halfWidth).toBeGreaterThan(0.4);
      }
    // R 4.2.2: 26.889 unrounded by spread; by size 28.202 unrounded, but 14 9 5 rounds in favour of the wide zone (V 0.041345)
    expect(blockSampleSize({ zones: ZONES, margin: 0.4, confidence: 0.95, method: 'spread', factor: 'z' }).total).toBe(27);
    expect(blockSampleSize({ zones: ZONES, margin: 0.4, confidence: 0.95, method: 'area', factor: 'z' }).counts).toEqual([14, 9, 5]);
  });

  it('says when the minimum alone is enough and when all vines are not', () => {
    expect(blockSampleSize({ zones: ZONES, margin: 5, confidence: 0.95, method: 'spread' })).toMatchObject({ counts: [2, 2, 2], atMinimum: true, reached: true });
    const capped = ZONES.map((zone) => ({ ...zone, maximum: 5 }));
    expect(blockSampleSize({ zones: capped, margin: 0.2, confidence: 0.95, method: 'spread' })).toMatchObject({ counts: [5, 5, 5], reached: false });
  });
});

describe('several measures on one walk', () => {
  const zones: SharedZone[] = [{ vines: 900 }, { vines: 600 }, { vines: 300 }];
  const measures: MeasureDemand[] = [
    { code: 'brix', spreads: [1.1, 0.8, 1.5], margin: 0.5, confidence: 0.95 },
    { code: 'ph', spreads: [0.1, 0.14, 0.08], margin: 0.05, confidence: 0.95 },
    { code: 'clusterWeight', spreads: [38, 25, 45], margin: 12, confidence: 0.95 },
  ];

  it('gives the published limits and single-measure totals', () => {
    // R 4.2.2
    expectRelative(targetVariance(0.5, criticalZ(0.95)), 0.0650794429, 1e-8);
    expectRelative(targetVariance(12, criticalZ(0.95)), 37.4857591, 1e-8);
    const totals = measures.map((measure) => neymanTotal(zones.map((zone, i) => ({ vines: zone.vines, sd: measure.spreads[i]! })), targetVariance(measure.margin, criticalZ(0.95))));
    expectAll(totals, [17.3066, 18.3948, 31.7716], 1e-5);
  });

  it('finds the cheapest whole counts, the one with most room among ties, and the measure that decides', () => {
    // R 4.2.2: convex optimum 17.3300 7.6009 6.8408; integer optimum 32 by enumeration with four ties
    const answer = leastCostForAll(zones, measures, { factor: 'z' });
    expectAll(answer.relaxed, [17.33, 7.6009, 6.8408], 1e-5);
    expectRelative(sum(answer.relaxed), 31.7716, 1e-5);
    expect(answer.counts).toEqual([17, 8, 7]);
    expect(answer.cost).toBe(32);
    expectRelative(Math.max(...answer.ratios), 0.993636, 1e-6);
    expect(answer.binding).toEqual(['clusterWeight']);
    expect(answer).toMatchObject({ reached: true, proved: true });
    // The convex optimum uses 54 % and 69 % of the other two limits
    const relaxedShares = measures.slice(0, 2).map((measure, j) => allocationVariance(zones.map((zone, i) => ({ vines: zone.vines, sd: measure.spreads[i]! })), answer.relaxed) / targetVariance([0.5, 0.05][j]!, criticalZ(0.95)));
    expect(relaxedShares.map((share) => Math.round(share * 100))).toEqual([54, 69]);
  });

  it('asks for far more when every zone must keep every margin itself', () => {
    // R 4.2.2 by search, without the population correction
    const demands = everyZoneCounts(zones, measures, { finitePopulation: false });
    expect(demands.map(({ byMeasure }) => byMeasure.map(({ n }) => n))).toEqual([[22, 18, 41], [13, 33, 20], [38, 13, 57]]);
    expect(demands.map(({ n }) => n)).toEqual([41, 33, 57]);
    expect(demands.map(({ driver }) => driver)).toEqual(['clusterWeight', 'ph', 'clusterWeight']);
  });

  it('keeps every margin by t as well', () => {
    const answer = leastCostForAll(zones, measures);
    expect(answer.cost).toBeGreaterThanOrEqual(32);
    measures.forEach((measure) => {
      const priced = zones.map((zone, i) => ({ vines: zone.vines, sd: measure.spreads[i]! }));
      expect(blockPrecision(priced, answer.counts, { confidence: 0.95 }).halfWidth).toBeLessThanOrEqual(measure.margin * (1 + 1e-9));
    });
  });

  it('measures fewer vines where a measure needs fewer, never more than are visited', () => {
    const visited = leastCostForAll(zones, measures).counts;
    const trimmed = trimToVisited(zones, measures, visited);
    trimmed.forEach((counts, j) => {
      counts.forEach((n, i) => expect(n).toBeLessThanOrEqual(visited[i]!));
      const priced = zones.map((zone, i) => ({ vines: zone.vines, sd: measures[j]!.spreads[i]! }));
      expect(blockPrecision(priced, counts, { confidence: 0.95 }).halfWidth).toBeLessThanOrEqual(measures[j]!.margin * (1 + 1e-9));
    });
    expect(sum(trimmed[0]!)).toBeLessThan(sum(visited));
  });

  it('is as cheap as brute force on random small problems, with uneven costs and two limits', () => {
    const random = seededRandom(21);
    for (let trial = 0; trial < 60; trial++) {
      const costs = Array.from({ length: 3 }, () => 1 + 4 * random());
      const maximum = Array.from({ length: 3 }, () => 6 + Math.floor(random() * 12));
      const terms = [0, 1].map(() => costs.map(() => random() ** 2));
      const limits = terms.map((row) => row.reduce((total, term, i) => total + term / maximum[i]!, 0) * (1.05 + 2 * random()));
      const problem = { costs, minimum: [2, 2, 2], maximum, terms, limits };
      const answer = leastCostCounts(problem);
      let cheapest = Infinity;
      for (let a = 2; a <= maximum[0]!; a++)
        for (let b = 2; b <= maximum[1]!; b++)
          for (let c = 2; c <= maximum[2]!; c++) {
            const counts = [a, b, c];
            const fits = terms.every((row, j) => row.reduce((total, term, i) => total + term / counts[i]!, 0) <= limits[j]! * (1 + 1e-12));
            if (fits) cheapest = Math.min(cheapest, costs.reduce((total, cost, i) => total + cost * counts[i]!, 0));
          }
      expect(answer.proved).toBe(true);
      expectRelative(answer.cost, cheapest, 1e-9);
      expect(answer.lowerBound).toBeLessThanOrEqual(cheapest * (1 + 1e-9));
    }
  });

  it('solves twelve zones and six measures at once', () => {
    const random = seededRandom(3);
    const many: SharedZone[] = Array.from({ length: 12 }, () => ({ vines: 200 + Math.floor(1500 * random()), cost: 60 + 60 * random() }));
    const six = Array.from({ length: 6 }, (_, j) => ({ code: `m${j}`, spreads: many.map(() => 0.5 + random()), margin: 0.12 + 0.02 * j, confidence: 0.95 }));
    const started = performance.now();
    const answer = leastCostForAll(many, six);
    expect(answer.reached).toBe(true);
    expect(performance.now() - started).toBeLessThan(3000);
    expect(answer.cost).toBeLessThan(answer.lowerBound * 1.02);
  });

  it('is as cheap as brute force where Student’s factor moves with the counts, from two samples a zone', () => {
    // Cochran 1977 §5.4 with the degrees of freedom of Satterthwaite 1946, over all counts that cost less.
    const random = seededRandom(12);
    for (let problem = 0; problem < 60; problem++) {
      const zones = [0, 1, 2].map(() => ({ vines: 9 + Math.floor(random() * 300), cost: 140 + 60 * Math.floor(random() * 3), minimum: 2, maximum: 9 + Math.floor(random() * 9) }));
      const demands = ['first', 'second', 'third'].map((code) => ({ code, margin: 0.45 + 0.4 * random(), confidence: random() < 0.5 ? 0.9 : 0.95, spreads: zones.map(() => 0.4 + 1.2 * random()) }));
      const keeps = (counts: readonly number[]) => demands.every((demand) => blockPrecision(zones.map((zone, i) => ({ ...zone, sd: demand.spreads[i]! })), counts, demand).halfWidth <= demand.margin * (1 + 1e-12));
      const costOf = (counts: readonly number[]) => counts.reduce((sum, n, i) => sum + n * zones[i]!.cost, 0);
      const most = zones.map(({ vines, maximum }) => Math.min(vines, maximum));
      if (!keeps(most)) continue;
      const answer = leastCostForAll(zones, demands);
      let least = Infinity;
      for (let a = 2; a <= most[0]!; a++) for (let b = 2; b <= most[1]!; b++) for (let c = 2; c <= most[2]!; c++) if (costOf([a, b, c]) < Math.min(least, answer.cost + 1) && keeps([a, b, c])) least = costOf([a, b, c]);
      expect(answer.reached && keeps(answer.counts)).toBe(true);
      expect(answer.cost).toBe(least);
    }
  });

  it('does not ask for every vine because two samples a zone would have few degrees of freedom', () => {
    const zones = [{ vines: 9, cost: 260, minimum: 2 }, { vines: 400, cost: 140, minimum: 2, maximum: 280 }, { vines: 158, cost: 260, minimum: 2, maximum: 25 }];
    const demands = [
      { code: 'first', margin: 0.39, confidence: 0.9, spreads: [1.18, 0.93, 0.56] },
      { code: 'second', margin: 0.74, confidence: 0.99, spreads: [0.42, 1.84, 0.64] },
      { code: 'third', margin: 0.55, confidence: 0.95, spreads: [1.16, 0.44, 1.39] },
    ];
    // By every set of counts, in Python with scipy 1.17.
    expect(leastCostForAll(zones, demands)).toMatchObject({ counts: [2, 25, 5], reached: true });
  });

  it('says when not even all vines keep a limit', () => {
    const capped = zones.map((zone) => ({ ...zone, maximum: 4 }));
    expect(leastCostForAll(capped, measures)).toMatchObject({ reached: false, counts: [4, 4, 4] });
  });
});
