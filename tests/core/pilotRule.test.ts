import { describe, expect, it } from 'vitest';
import { randomNormal, seededRandom, type Random } from '../../shared/analysis/random.ts';
import { planChoices } from '../../shared/contracts/planChoices.ts';
import type { BasisSpread, PlanBasis } from '../../shared/contracts/planBasis.ts';
import { mergedPilot } from '../../shared/sampling/mergedZones.ts';
import { pilotReadingsOf, type PilotReadings } from '../../shared/sampling/pilotReadings.ts';
import { answerPlan } from '../../shared/sampling/plan.ts';
import { criticalT } from '../../shared/sampling/quantiles.ts';
import { steinSampleSize } from '../../shared/sampling/sampleSize.ts';

const assumed: BasisSpread = { kind: 'sd', value: 1, cautious: 1.2, source: 'trade', n: 0, seasons: [], df: null, outliers: 0, withOutliers: null, withoutOutliers: null, expectedMean: 22, isMeanAssumed: true };
function basis(vines: readonly number[], pilots: readonly (PilotReadings | null)[]): PlanBasis {
  return {
    zoningId: '', zoningNumber: 1, blockId: '', blockName: '', seasonId: '', seasonName: '', pilot: null,
    zones: vines.map((count, i) => ({ id: '', number: i + 1, name: '', colour: null, vines: count, eligible: count })),
    measures: [{ code: 'brix', name: '', unit: '°Brix', decimals: 1, margin: 0.5, marginKind: 'absolute', confidence: 0.95, secondsPerSample: 60, skewed: false, measuredIn: 'lab', sampledUnit: 'vine', rowSide: 'either', tradeSource: '', spreads: vines.map(() => assumed), pilots: [...pilots] }],
    walks: [], isWalkLaid: false, settings: { floorVines: 2, impracticalSamples: 60, dayHours: 80, costPerHour: 20, currency: 'EUR' },
  };
}
const choices = (over: object = {}) => planChoices.parse({ measures: [{ code: 'brix' }], afterPilot: true, ...over });

/** Share of seasons in which the interval holds the truth, with its Monte Carlo standard deviation below 0.2 points. */
const seasons = 12_000;
function coverage(seed: number, holds: (random: Random) => boolean): number {
  const random = seededRandom(seed);
  let held = 0;
  for (let season = 0; season < seasons; season++) if (holds(random)) held += 1;
  return (100 * held) / seasons;
}
const readings = (zone: string, n: number, { mean, sd }: { mean: number; sd: number }, random: Random) =>
  Array.from({ length: n }, () => ({ block: 'b', zone, season: 2026, visit: '2026-06-01', value: mean + sd * randomNormal(random) }));

describe('the two-stage rule in a zone with an end', () => {
  it('takes the correction for the vines there are into the count and into the interval', () => {
    // Stein 1945; Cochran 1977 §§4.6–4.7: n₁ 10, s₁ 1.2, E 0.5 → 29.475965; among 60 vines 29.475965/(1 + 29.475965/60) = 19.765731 → 20.
    const answer = steinSampleSize({ pilotN: 10, pilotSpread: 1.2, margin: 0.5, confidence: 0.95, populationSize: 60 });
    expect(answer.unrounded).toBeCloseTo(29.475965, 6);
    expect(answer.inPopulation).toBeCloseTo(19.765731, 6);
    expect(answer.total).toBe(20);
    const { counts } = answerPlan(basis([60], [{ n: 10, df: 9, spread: 1.2, mean: 22 }]), choices());
    expect(counts.zones[0]!.halfWidths[0]).toBeCloseTo(2.262157163 * (1.2 / Math.sqrt(20)) * Math.sqrt(1 - 20 / 60), 8);
    expect(counts.zones[0]!.halfWidths[0]).toBeLessThanOrEqual(0.5);
    // Speaking for more than these vines, nothing runs out.
    expect(answerPlan(basis([60], [{ n: 10, df: 9, spread: 1.2, mean: 22 }]), choices({ population: 'endless' })).counts.zones[0]!.visits).toBe(30);
  });

  it('covers as stated when vines are drawn from 60 without putting any back', () => {
    // Own simulation; a pilot of 8, then as many of the 60 as the rule says.
    const held = coverage(11, (random) => {
      const vines = Array.from({ length: 60 }, () => randomNormal(random));
      const truth = vines.reduce((sum, value) => sum + value, 0) / 60;
      const draw = (n: number) => {
        for (let i = 0; i < n; i++) {
          const j = i + Math.floor(random() * (60 - i));
          [vines[i], vines[j]] = [vines[j]!, vines[i]!];
        }
        return vines.slice(0, n);
      };
      const [pilot] = pilotReadingsOf(draw(8).map((value) => ({ block: 'b', zone: '1', season: 1, visit: 'v', value })), { zones: ['1'], kind: 'sd', season: 1 });
      const { total } = steinSampleSize({ pilotN: 8, pilotSpread: pilot!.spread, margin: 0.5, confidence: 0.95, populationSize: 60 });
      const mean = draw(total).reduce((sum, value) => sum + value, 0) / total;
      return Math.abs(mean - truth) <= 0.5;
    });
    expect(held).toBeGreaterThan(94.5);
  });
});

describe('the two-stage rule for zones sampled as one', () => {
  it('puts the parts of the variance together as by hand', () => {
    // Weights ¼ and ¾, n 5 and 10, s 2 and 1, means 20 and 24: within ¼·4·(1 − ¾/5) + ¾·1·(1 − ¼/10) = 0.85 + 0.73125;
    // M = 23, between ¼·9 + ¾·1 = 3; variance 4.58125. Uncertainty 2·0.85²/4 + 2·0.73125²/9 + 4·(¹⁄₁₆·9·4/5 + ⁹⁄₁₆·1·1/10)
    // = 0.36125 + 0.118828 + 2.025; degrees of freedom 2·4.58125²/2.505078 = 16.76 → 16 (Satterthwaite 1946).
    const parts = [{ vines: 100, pilot: { n: 5, df: 4, spread: 2, mean: 20 } }, { vines: 300, pilot: { n: 10, df: 9, spread: 1, mean: 24 } }];
    const merged = mergedPilot(parts, 'sd')!;
    expect(merged.spread ** 2).toBeCloseTo(4.58125, 12);
    expect(merged).toMatchObject({ n: 15, df: 16, mean: 23 });
    // The same where spreads are shares of the mean.
    const shares = mergedPilot(parts.map(({ vines, pilot }) => ({ vines, pilot: { ...pilot, spread: pilot.spread / pilot.mean } })), 'cv')!;
    expect(shares.spread).toBeCloseTo(Math.sqrt(4.58125) / 23, 12);
  });

  it('gives up where the pilot read fewer than two vines of a zone, or its means were not kept', () => {
    expect(mergedPilot([{ vines: 1, pilot: { n: 5, df: 4, spread: 1, mean: 20 } }, { vines: 1, pilot: null }], 'sd')).toBeNull();
    expect(mergedPilot([{ vines: 1, pilot: { n: 5, df: 4, spread: 1, mean: 20 } }, { vines: 1, pilot: { n: 5, df: 4, spread: 1, mean: null } }], 'sd')).toBeNull();
  });

  it('decides the count of the pool', () => {
    const pilots = [{ n: 10, df: 9, spread: 1, mean: 22 }, { n: 10, df: 9, spread: 1, mean: 22.5 }, { n: 10, df: 9, spread: 1, mean: 24 }];
    const { question, counts } = answerPlan(basis([400, 400, 400], pilots), choices({ pools: [[1, 2]] }));
    const pool = question.measures[0]!.pilots![0]!;
    expect(pool).toEqual(mergedPilot(pilots.slice(0, 2).map((pilot) => ({ vines: 400, pilot })), 'sd'));
    const { total } = steinSampleSize({ pilotN: 20, pilotDf: pool.df, pilotSpread: pool.spread, margin: 0.5, confidence: 0.95, populationSize: 800 });
    expect(counts.zones[0]!.visits).toBe(total);
    expect(counts.zones[0]!.halfWidths[0]).toBeLessThanOrEqual(0.5);
  });

  // Own simulation: a pilot of fixed numbers in each zone, then a fresh random sample of the pool as large as the rule says.
  const cases = [
    ['alike zones, pilots 10 and 10', [{ weight: 0.5, mean: 22, sd: 1, n: 10 }, { weight: 0.5, mean: 22, sd: 1, n: 10 }], 0.4],
    ['one zone twice as uneven, pilots 5 and 9', [{ weight: 0.3, mean: 22, sd: 2, n: 5 }, { weight: 0.7, mean: 22.5, sd: 1, n: 9 }], 0.5],
    ['means three apart, pilots 5 and 5', [{ weight: 0.4, mean: 20, sd: 1, n: 5 }, { weight: 0.6, mean: 23, sd: 1, n: 5 }], 0.6],
    ['three zones, pilots 5, 6 and 9', [{ weight: 0.2, mean: 21, sd: 0.8, n: 5 }, { weight: 0.3, mean: 22, sd: 1.2, n: 6 }, { weight: 0.5, mean: 23.5, sd: 1, n: 9 }], 0.5],
  ] as const;
  for (const [name, zones, margin] of cases)
    it(`covers at 95 %: ${name}`, () => {
      const truth = zones.reduce((sum, { weight, mean }) => sum + weight * mean, 0);
      const held = coverage(29, (random) => {
        const read = zones.flatMap((zone, i) => readings(String(i), zone.n, zone, random));
        const pilots = pilotReadingsOf(read, { zones: zones.map((_, i) => String(i)), kind: 'sd', season: 2026 });
        const pilot = mergedPilot(zones.map(({ weight }, i) => ({ vines: weight * 1000, pilot: pilots[i]! })), 'sd')!;
        const { total } = steinSampleSize({ pilotN: pilot.n, pilotDf: pilot.df, pilotSpread: pilot.spread, margin, confidence: 0.95 });
        let sum = 0;
        for (let i = 0; i < total; i++) {
          let at = random();
          const zone = zones.find(({ weight }) => (at -= weight) < 0) ?? zones.at(-1)!;
          sum += zone.mean + zone.sd * randomNormal(random);
        }
        return Math.abs(sum / total - truth) <= (criticalT(0.95, pilot.df) * pilot.spread) / Math.sqrt(total);
      });
      expect(held).toBeGreaterThan(94.5);
    });
});

describe('the two-stage rule for the mean of a block', () => {
  it('takes the degrees of freedom of the pilot, not of the vines still to be read', () => {
    // By hand: W ½ each, s₁ 1 and 2, df 4 and 4: with n and n the parts are 1/4n and 4/4n; Satterthwaite 1946 gives
    // (5/4)²/((1 + 16)/16/4) = 5.882 whatever n is.
    const pilots = [{ n: 5, df: 4, spread: 1, mean: 22 }, { n: 5, df: 4, spread: 2, mean: 22 }];
    const ask = choices({ question: 'block', allocation: 'equal', population: 'endless' });
    const { counts } = answerPlan(basis([500, 500], pilots), ask);
    const [one, other] = counts.zones.map(({ visits }) => visits);
    const half = (n: number) => criticalT(0.95, 25 / 17 * 4) * Math.sqrt(0.25 / n + 1 / n);
    expect([one, other]).toEqual([one, one]);
    expect(counts.measures[0]!.blockHalfWidth).toBeCloseTo(half(one!), 9);
    expect(half(one!)).toBeLessThanOrEqual(0.5);
    expect(half(one! - 1)).toBeGreaterThan(0.5);
  });

  it('covers at 95 % however the samples are shared', () => {
    for (const allocation of ['leastCost', 'area', 'spread'] as const) {
      const zones = [{ mean: 21, sd: 1, n: 6 }, { mean: 23, sd: 1.6, n: 6 }];
      const held = coverage(5, (random) => {
        const read = zones.flatMap((zone, i) => readings(String(i + 1), zone.n, zone, random));
        const pilots = pilotReadingsOf(read, { zones: ['1', '2'], kind: 'sd', season: 2026 });
        const { counts } = answerPlan(basis([600, 400], pilots), choices({ question: 'block', allocation, population: 'endless' }));
        const mean = counts.zones.reduce((sum, { visits }, i) => sum + (i === 0 ? 0.6 : 0.4) * (zones[i]!.mean + (zones[i]!.sd * randomNormal(random)) / Math.sqrt(visits)), 0);
        return Math.abs(mean - (0.6 * 21 + 0.4 * 23)) <= 0.5;
      });
      expect(held).toBeGreaterThan(94.5);
    }
  });
});
