import { describe, expect, it } from 'vitest';
import type { BasisSpread, PlanBasis } from '../../shared/contracts/planBasis.ts';
import { planChoices } from '../../shared/contracts/planChoices.ts';
import { mergedFigures } from '../../shared/sampling/mergedZones.ts';
import { answerPlan, questionOf } from '../../shared/sampling/plan.ts';
import { choicesJoined, headOf, joinPools, membersOf, partPool, pooledBasis } from '../../shared/sampling/pooledZones.ts';

function spread(value: number, over: Partial<BasisSpread> = {}): BasisSpread {
  return { kind: 'sd', value, cautious: value * 1.2, source: 'zone', n: 12, seasons: [2025], df: 11, outliers: 0, withOutliers: null, withoutOutliers: null, expectedMean: 22, isMeanAssumed: false, ...over };
}
function basis(spreads: readonly BasisSpread[], vines: readonly number[] = [100, 300, 600]): PlanBasis {
  return {
    zoningId: '', zoningNumber: 1, blockId: '', blockName: '', seasonId: '', seasonName: '', pilot: null,
    zones: vines.map((count, i) => ({ id: `zone ${i + 1}`, number: i + 1, name: i === 1 ? '' : `Strip ${i + 1}`, colour: null, vines: count, eligible: count - 20 })),
    measures: [{ code: 'brix', name: '', unit: '°Brix', decimals: 1, margin: 0.5, marginKind: 'absolute', confidence: 0.95, secondsPerSample: 60, skewed: false, measuredIn: 'lab', sampledUnit: 'vine', rowSide: 'either', tradeSource: '', spreads: [...spreads], pilots: spreads.map(() => ({ n: 10, df: 9, spread: 1, mean: 22 })) }],
    walks: [], isWalkLaid: false, settings: { floorVines: 2, impracticalSamples: 60, dayHours: 100, costPerHour: 20, currency: 'EUR' },
  };
}

describe('pools of zones', () => {
  it('are joined and parted whole, and the lowest number speaks for them', () => {
    expect(joinPools([], 3, 1)).toEqual([[1, 3]]);
    expect(joinPools([[1, 3]], 3, 2)).toEqual([[1, 2, 3]]);
    expect(joinPools([[1, 3], [2, 4]], 4, 1)).toEqual([[1, 2, 3, 4]]);
    expect(joinPools([[2, 4]], 1, 3)).toEqual([[2, 4], [1, 3]]);
    expect(partPool([[1, 3], [2, 4]], 3)).toEqual([[2, 4]]);
    expect([1, 2, 3].map((zone) => headOf([[3, 2]], zone))).toEqual([1, 2, 2]);
    expect(membersOf([[2, 3]], 1)).toEqual([1]);
  });

  it('hold each zone once', () => {
    expect(planChoices.safeParse({ measures: [{ code: 'brix' }], pools: [[1, 2], [2, 3]] }).success).toBe(false);
    expect(planChoices.safeParse({ measures: [{ code: 'brix' }], pools: [[1]] }).success).toBe(false);
  });
});

describe('zones taken as one', () => {
  it('spread inside them and between their means', () => {
    // By hand: within ¼·4 + ¾·1 = 1.75; mean 23; between ¼·9 + ¾·1 = 3; variance 4.75.
    const parts = [{ vines: 100, spread: { kind: 'sd' as const, value: 2 }, mean: 20 }, { vines: 300, spread: { kind: 'sd' as const, value: 1 }, mean: 24 }];
    const merged = mergedFigures(parts);
    expect(merged.spread.value).toBeCloseTo(Math.sqrt(4.75), 12);
    expect(merged.mean).toBe(23);
    // The same as shares of the mean: 2/20 and 1/24 give √4.75/23.
    const shares = mergedFigures(parts.map(({ spread: { value }, mean, ...part }) => ({ ...part, mean, spread: { kind: 'cv' as const, value: value / mean } })));
    expect(shares.spread.value).toBeCloseTo(Math.sqrt(4.75) / 23, 12);
  });

  it('without means only the spreads inside are pooled', () => {
    const merged = mergedFigures([{ vines: 1, spread: { kind: 'cv', value: 0.3 }, mean: null }, { vines: 1, spread: { kind: 'cv', value: 0.4 }, mean: 20 }]);
    expect(merged.spread.value).toBeCloseTo(Math.sqrt(0.125), 12);
    expect(merged.mean).toBeNull();
  });

  it('have all their vines, the readings of all, and no better source than the worst of them', () => {
    const pooled = pooledBasis(basis([spread(1.1), spread(0.8, { n: 8, df: 7, seasons: [2024, 2025], outliers: 1, withOutliers: 1.4, withoutOutliers: 0.8 }), spread(1.5)]), [[1, 2]]);
    expect(pooled.zones).toEqual([
      expect.objectContaining({ id: 'zone 1', number: 1, name: 'Strip 1 + 2', vines: 400, eligible: 360, members: [1, 2] }),
      expect.objectContaining({ id: 'zone 3', number: 3, vines: 600 }),
    ]);
    const [first, second] = pooled.measures[0]!.spreads;
    expect(first).toMatchObject({ source: 'zone', n: 20, df: 18, seasons: [2024, 2025], outliers: 1 });
    expect(first!.value).toBeCloseTo(Math.sqrt(0.25 * 1.21 + 0.75 * 0.64), 12);
    expect(first!.withoutOutliers).toBeCloseTo(first!.value, 12);
    expect(first!.withOutliers!).toBeGreaterThan(first!.value);
    expect(second!.value).toBe(1.5);
    // Weights ¼ and ¾, both s 1 of ten, no difference between means: ¼(1 − ¾/10) + ¾(1 − ¼/10) = 0.9625, a little below 1 because
    // two means of ten differ by chance; degrees of freedom 2·0.9625²/(2·0.23125²/9 + 2·0.73125²/9) = 14.17 → 14.
    expect(pooled.measures[0]!.pilots).toEqual([{ n: 20, df: 14, mean: 22, spread: expect.closeTo(Math.sqrt(0.9625), 12) }, { n: 10, df: 9, spread: 1, mean: 22 }]);
    const guessed = pooledBasis(basis([spread(1), spread(1, { source: 'trade', n: 0, seasons: [], df: null }), spread(1)]), [[1, 2]]);
    expect(guessed.measures[0]!.spreads[0]).toMatchObject({ source: 'trade', n: 0, df: null });
  });

  it('a block-wide spread that two zones share is counted once', () => {
    const shared = spread(1, { source: 'block', n: 30, df: 25 });
    expect(pooledBasis(basis([shared, shared, shared]), [[1, 3]]).measures[0]!.spreads[0]).toMatchObject({ source: 'block', n: 30, df: 25 });
  });

  it('numbers that are no zones change nothing', () => {
    const plain = basis([spread(1), spread(1), spread(1)]);
    expect(pooledBasis(plain, [[1, 9]])).toBe(plain);
  });
});

describe('a plan with pooled zones', () => {
  const spreads = [spread(1.1), spread(1.1), spread(1.1)];
  const choices = (over: object = {}) => planChoices.parse({ measures: [{ code: 'brix', margin: 0.3 }], ...over });

  it('is the plan that the advice promised', () => {
    const { advice } = answerPlan(basis(spreads), choices({ limits: { visitsPerZone: 20 } }));
    const option = advice!.options.find(({ kind }) => kind === 'poolZones')!;
    if (option.kind !== 'poolZones') throw new Error('no pooling was offered');
    const taken = answerPlan(basis(spreads), choices({ limits: { visitsPerZone: 20 }, pools: [option.zones.map(Number)] }));
    expect(taken.counts.visits).toBe(option.visits);
    expect(taken.counts.hours).toBeCloseTo(option.hours, 9);
    expect(taken.counts.visits).toBeLessThan(answerPlan(basis(spreads), choices()).counts.visits);
  });

  it('forgets what was typed for the zones that are joined, and keeps the rest', () => {
    const typed = choices({ measures: [{ code: 'brix', spreads: { 1: 1.4, 2: 2 }, means: { 1: 21, 3: 19 } }] });
    expect(choicesJoined(typed, 2, 3).measures).toEqual([{ code: 'brix', spreads: { 1: 1.4 }, means: { 1: 21 } }]);
  });

  it('keeps the margin for the zones together, and takes a typed spread for the pool', () => {
    const { counts } = answerPlan(basis(spreads), choices({ pools: [[1, 2]] }));
    expect(counts.zones.map(({ zone }) => zone)).toEqual(['1', '3']);
    expect(counts.zones[0]!.halfWidths[0]).toBeLessThanOrEqual(0.3);
    const typed = questionOf(basis(spreads), choices({ pools: [[2, 3]], measures: [{ code: 'brix', spreads: { 2: 2 } }] }));
    expect(typed.measures[0]!.spreads.map(({ value }) => value)).toEqual([1.1, 2]);
  });
});
