import { describe, expect, it } from 'vitest';
import { pilotQuotas } from '../../shared/sampling/pilot.ts';
import { planSpread, type SpreadOptions, type SpreadQuestion } from '../../shared/sampling/planSpread.ts';
import type { HistoryReading } from '../../shared/sampling/pooling.ts';
import { sdUpperFactor } from '../../shared/sampling/sdInterval.ts';
import { summarise } from '../../shared/sampling/variances.ts';
import { largestRemainder } from '../../shared/sampling/rounding.ts';

function expectRelative(actual: number, expected: number, tolerance = 1e-9): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

/** Readings spread evenly around a centre with a known sample sd. */
function evenly(centre: number, sd: number, n: number): number[] {
  const ranks = Array.from({ length: n }, (_, i) => i - (n - 1) / 2);
  const unit = Math.sqrt(ranks.reduce((sum, rank) => sum + rank * rank, 0) / (n - 1));
  return ranks.map((rank) => centre + (rank * sd) / unit);
}

function readings(zone: string | null, values: readonly number[], where: Partial<HistoryReading> = {}): HistoryReading[] {
  return values.map((value) => ({ block: 'north', zone, season: 2026, visit: '2026-09-01', ...where, value }));
}

function ask(all: readonly HistoryReading[], zones: readonly string[], options: SpreadOptions = {}, more: Partial<SpreadQuestion> = {}) {
  return planSpread({ block: 'north', zones, season: 2026, readings: all, tradeDefault: { kind: 'sd', value: 1.1 }, options, ...more });
}

describe('the spread a plan assumes', () => {
  it('is the trade default with a pilot advised where nothing was ever read', () => {
    const [only] = ask([], ['1']);
    expect(only).toMatchObject({ source: 'trade', spread: { kind: 'sd', value: 1.1 }, n: 0, df: null, pilotAdvised: true, own: null, expectedMean: null });
    expect(ask([], ['1'], {}, { typicalMean: 22 })[0]!.expectedMean).toBe(22);
  });

  it("is the zone's own history, pulled towards the block's, where there is enough of it", () => {
    const [first, second] = ask([...readings('1', evenly(22, 0.6, 9)), ...readings('2', evenly(23, 1.2, 9))], ['1', '2']);
    const block = (8 * 0.36 + 8 * 1.44) / 16;
    expect(first).toMatchObject({ source: 'zone', n: 9, seasons: [2026], pilotAdvised: false });
    // Smyth 2004 with 6 prior degrees of freedom, worked from the formula
    expectRelative(first!.spread.value ** 2, (6 * block + 8 * 0.36) / 14);
    expectRelative(second!.spread.value ** 2, (6 * block + 8 * 1.44) / 14);
    expectRelative(first!.df!, 14);
    expectRelative(first!.own!.spread, 0.6);
    expect(first!.prior).toMatchObject({ source: 'block', df: 6 });
  });

  it("is the block's where the zone has too few readings, which still count a little", () => {
    const [, second] = ask([...readings('1', evenly(22, 0.8, 12)), ...readings('2', [20, 24])], ['1', '2']);
    expect(second).toMatchObject({ source: 'block', pilotAdvised: false });
    const block = (11 * 0.64 + 8) / 12;
    expectRelative(second!.spread.value ** 2, (6 * block + 8) / 7);
  });

  it("is the estate's where the block has none, and the trade default's where the estate has too little", () => {
    const south = readings('1', evenly(21, 0.9, 12), { block: 'south' });
    const fromEstate = ask(south, ['1'])[0]!;
    expect(fromEstate).toMatchObject({ source: 'estate', n: 12, own: null });
    expectRelative(fromEstate.spread.value, 0.9);
    expect(ask(readings('1', [20, 21, 22], { block: 'south' }), ['1'])[0]!.source).toBe('trade');
  });

  it('pulls a zone that is alone in its block towards the estate, or the trade default, not towards itself', () => {
    const alone = ask(readings('1', evenly(22, 0.5, 9)), ['1'])[0]!;
    expect(alone).toMatchObject({ source: 'zone', prior: { source: 'trade' } });
    expectRelative(alone.spread.value ** 2, (6 * 1.21 + 8 * 0.25) / 14);
  });

  it('gives five zones that differ by chance one value, known as well as the block knows it', () => {
    const zones = ['1', '2', '3', '4', '5'];
    const all = [0.9, 1.1, 1.0, 1.2, 0.8].flatMap((variance, i) => readings(zones[i]!, evenly(22, Math.sqrt(variance), 5)));
    for (const zone of ask(all, zones)) {
      expectRelative(zone.spread.value, 1); // limma 3.54.1 gives 1.0 for these variances
      expectRelative(zone.df!, 20);
      expect(zone.source).toBe('zone');
    }
  });

  it('can be taken as it is, zone by zone', () => {
    const [first] = ask([...readings('1', evenly(22, 0.6, 9)), ...readings('2', evenly(23, 1.2, 9))], ['1', '2'], { shrinkage: 'none' });
    expectRelative(first!.spread.value, 0.6);
    expect(first!.prior).toBeNull();
  });

  it('never counts the rise of sugar between visits as spread', () => {
    const rising = [18, 20, 22, 24].flatMap((centre, i) => readings('1', evenly(centre, 0.5, 6), { visit: `2026-08-0${i + 1}` }));
    expectRelative(ask(rising, ['1'], { shrinkage: 'none' })[0]!.spread.value, 0.5);
  });

  it('plans with the upper limit of the spread when asked, and says by which factor', () => {
    const all = [...readings('1', evenly(22, 0.6, 9)), ...readings('2', evenly(23, 1.2, 9))];
    const [cautious] = ask(all, ['1', '2'], { upperLevel: 0.8 });
    expectRelative(cautious!.upperFactor, sdUpperFactor(14));
    expectRelative(cautious!.planningSpread.value, cautious!.spread.value * cautious!.upperFactor);
    expect(ask([], ['1'], { upperLevel: 0.8 })[0]!.upperFactor).toBe(1);
  });

  it('leaves an outlier out of the advice and shows the spread with it', () => {
    const clean = evenly(22, 0.6, 9);
    const [zone] = ask(readings('1', [...clean, 2.2]), ['1'], { shrinkage: 'none' });
    expect(zone!.outliers).toBe(1);
    expectRelative(zone!.spread.value, 0.6);
    expect(zone!.ownWithOutliers!.spread).toBeGreaterThan(5);
  });

  it('counts an outlier where the planner wants it, and still says which it is and what it does', () => {
    const [zone] = ask(readings('1', [...evenly(22, 0.6, 9), 2.2]), ['1'], { shrinkage: 'none', outliers: 'in' });
    expect(zone!.outliers).toBe(1);
    expectRelative(zone!.spread.value, zone!.ownWithOutliers!.spread);
    expectRelative(zone!.ownWithoutOutliers!.spread, 0.6);
    expect(zone!.n).toBe(10);
  });

  it('does not plan with a spread of 0 when the instrument has a step', () => {
    const [zone] = ask(readings('1', [22, 22, 22, 22, 22, 22]), ['1'], { shrinkage: 'none', resolution: 0.2 });
    expect(zone!.own!.spread).toBe(0);
    const mixed = ask(readings('1', [22, 22, 22, 22, 22, 22]), ['1'], { resolution: 0.2 })[0]!;
    expectRelative(mixed.spread.value ** 2, (6 * 1.21 + (5 * 0.04) / 12) / 11);
  });

  it('takes the step of a count as a share of the mean where spreads are shares', () => {
    // Counts around 26 with a spread of 7 %: the step of 1 is 1/26 of the mean, and not 100 % of it.
    const counts = [24, 25, 26, 27, 28, 24, 25, 26, 27, 28];
    const [zone] = ask(readings('1', counts), ['1'], { shrinkage: 'fixed', resolution: 1 }, { tradeDefault: { kind: 'cv', value: 0.25 } });
    const own = summarise(counts).variance / 26 ** 2;
    expectRelative(zone!.spread.value ** 2, (6 * 0.0625 + 9 * own) / 15);
    const [equal] = ask(readings('1', [26, 26, 26, 26, 26, 26]), ['1'], { shrinkage: 'fixed', resolution: 1 }, { tradeDefault: { kind: 'cv', value: 0.25 } });
    expectRelative(equal!.spread.value ** 2, (6 * 0.0625 + 5 / 26 ** 2 / 12) / 11);
  });

  it("expects the mean of the zone's latest visit, else of the block's", () => {
    const all = [...readings('1', [18, 20], { visit: '2026-08-10' }), ...readings('1', [22, 23], { visit: '2026-09-01' }), ...readings('2', [26, 26], { season: 2025 })];
    const [first, , third] = ask(all, ['1', '2', '3']);
    expect(first!.expectedMean).toBe(22.5);
    expect(third!.expectedMean).toBe(22.5);
  });
});

describe('pilot', () => {
  it('gives every zone five vines and the rest to the larger ones', () => {
    const quotas = pilotQuotas([{ zone: '1', vines: 900 }, { zone: '2', vines: 600 }, { zone: '3', vines: 300 }]);
    expect(quotas.map(({ n }) => n).reduce((sum, n) => sum + n, 0)).toBe(20);
    expect(quotas.map(({ n }) => n)).toEqual([7, 7, 6]); // by hand: 5 spare as 2.51, 1.67, 0.83
    expect(quotas.map(({ places }) => places)).toEqual([2, 2, 2]);
  });

  it('grows beyond 20 rather than starve a zone, and never asks for vines that are not there', () => {
    const many = pilotQuotas(Array.from({ length: 6 }, (_, i) => ({ zone: `${i}`, vines: 100 })));
    expect(many.every(({ n }) => n === 5)).toBe(true);
    expect(pilotQuotas([{ zone: '1', vines: 3 }, { zone: '2', vines: 4 }]).map(({ n }) => n)).toEqual([3, 4]);
  });
});

describe('rounding to whole numbers', () => {
  it('keeps the total and may leave a tiny zone with nothing', () => {
    // Largest remainder for 400, 50, 1200 and 30 vines and 20 samples, computed with Python
    const vines = [400, 50, 1200, 30];
    expect(largestRemainder(vines.map((size) => (20 * size) / 1680))).toEqual([5, 1, 14, 0]);
    expect(largestRemainder([3.3333333333333335, 3.3333333333333335, 3.333333333333333])).toEqual([4, 3, 3]);
  });
});
