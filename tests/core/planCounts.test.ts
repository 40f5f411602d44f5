import { describe, expect, it } from 'vitest';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { planForBudget, spent, type Budget } from '../../shared/sampling/budget.ts';
import { bestDivision, judgeParts, mergedSpread, partMeans, type LocatedReading } from '../../shared/sampling/divideZone.ts';
import { blockMaths } from '../../shared/sampling/blockMaths.ts';
import { adviseImpractical } from '../../shared/sampling/impractical.ts';
import type { Spread } from '../../shared/sampling/margins.ts';
import { planCounts } from '../../shared/sampling/planCounts.ts';
import type { PlanMeasure, PlanQuestion } from '../../shared/sampling/planQuestion.ts';
import { planAllocations } from '../../shared/contracts/planChoices.ts';
import { mergedFigures } from '../../shared/sampling/mergedZones.ts';
import { marginLadder, tradeOffCurves } from '../../shared/sampling/tradeOff.ts';

const sd = (value: number): Spread => ({ kind: 'sd', value });
const cv = (value: number): Spread => ({ kind: 'cv', value });

const BRIX: PlanMeasure = { code: 'brix', margin: { kind: 'absolute', value: 0.5 }, confidence: 0.95, spreads: [sd(1.1), sd(0.8), sd(1.5)], expectedMeans: [22.4, 23.8, 21], secondsPerSample: 60, moneyPerSample: 2 };
const PH: PlanMeasure = { code: 'ph', margin: { kind: 'absolute', value: 0.05 }, confidence: 0.95, spreads: [sd(0.1), sd(0.14), sd(0.08)], expectedMeans: [3.4, 3.5, 3.3], secondsPerSample: 60 };
const CLUSTERS: PlanMeasure = { code: 'clusterCount', margin: { kind: 'relative', value: 0.1 }, confidence: 0.95, spreads: [cv(0.25), cv(0.25), cv(0.3)], expectedMeans: [28, 30, 24], secondsPerSample: 90 };

const QUESTION: PlanQuestion = {
  zones: [{ zone: '1', vines: 900 }, { zone: '2', vines: 600 }, { zone: '3', vines: 300 }],
  measures: [BRIX, PH, CLUSTERS],
  question: 'eachZone',
  effort: { secondsPerVine: 90, moneyPerHour: 30 },
  minimum: 5,
};

describe('counts of a plan', () => {
  it('gives each zone the count of its most demanding measure and names it', () => {
    const plan = planCounts(QUESTION);
    // R 4.2.2 by search with the population correction: Brix 21 13 34, pH 18 32 12, clusters 26 26 34
    expect(plan.zones.map(({ counts }) => counts)).toEqual([[21, 18, 26], [13, 32, 26], [34, 12, 34]]);
    expect(plan.zones.map(({ visits }) => visits)).toEqual([26, 32, 34]);
    expect(plan.zones.map(({ drivers }) => drivers)).toEqual([['clusterCount'], ['ph'], ['brix', 'clusterCount']]);
    expect(plan.drivers[0]).toBe('clusterCount');
    expect(plan.measures.every(({ reached }) => reached)).toBe(true);
    plan.zones.forEach((zone) => zone.halfWidths.forEach((width, j) => expect(width).toBeLessThanOrEqual(QUESTION.measures[j]!.margin.value)));
  });

  it('adds up hours and money over shared walks', () => {
    const plan = planCounts(QUESTION);
    // By hand: 92 vines at 90 s; 68 + 62 samples at 60 s; 86 at 90 s
    expect(plan.hours).toBeCloseTo((92 * 90 + 130 * 60 + 86 * 90) / 3600, 10);
    expect(plan.money).toBeCloseTo(plan.hours * 30 + 68 * 2, 10);
    expect(plan.visits).toBe(92);
  });

  it('needs far fewer vines when only the mean of the block must be known', () => {
    for (const method of planAllocations) {
      const plan = planCounts({ ...QUESTION, question: 'block', method });
      expect(plan.visits).toBeLessThan(50);
      plan.measures.forEach(({ blockHalfWidth, reached }, j) => {
        expect(reached).toBe(true);
        expect(blockHalfWidth).toBeLessThanOrEqual(QUESTION.measures[j]!.margin.value * (1 + 1e-9));
      });
      plan.zones.forEach((zone) => zone.counts.forEach((n) => expect(n).toBeLessThanOrEqual(zone.visits)));
    }
    const hours = (method: PlanQuestion['method']) => planCounts({ ...QUESTION, question: 'block', method }).hours;
    expect(hours('leastCost')).toBeLessThanOrEqual(hours('equal'));
    expect(hours('leastCost')).toBeLessThanOrEqual(hours('area'));
  });

  it('works with shares alone while no mean is known, and asks for a mean where it must', () => {
    const unknown = { ...CLUSTERS, expectedMeans: [null, null, null] };
    const plan = planCounts({ ...QUESTION, measures: [unknown], question: 'block' });
    expect(plan.measures[0]!.reached).toBe(true);
    expect(() => planCounts({ ...QUESTION, measures: [{ ...unknown, margin: { kind: 'absolute', value: 3 } }] })).toThrow('expected mean');
  });

  it('says that the floor decides when the margins are wide', () => {
    const plan = planCounts({ ...QUESTION, measures: [{ ...BRIX, margin: { kind: 'absolute', value: 9 } }] });
    expect(plan.zones.map(({ visits }) => visits)).toEqual([5, 5, 5]);
    expect(plan.drivers).toEqual([]);
  });

  it('takes every eligible vine of a small zone and says that the margin is missed', () => {
    const plan = planCounts({ ...QUESTION, zones: [{ zone: '1', vines: 60, eligibleVines: 12 }], measures: [{ ...BRIX, spreads: [sd(1.5)], expectedMeans: [22] }] });
    expect(plan.zones[0]!.visits).toBe(12);
    expect(plan.measures[0]!.reached).toBe(false);
  });

  it('refuses an empty plan and a measure without spreads for every zone', () => {
    expect(() => planCounts({ ...QUESTION, zones: [] })).toThrow('at least one zone');
    expect(() => planCounts({ ...QUESTION, measures: [] })).toThrow('at least one measure');
    expect(() => planCounts({ ...QUESTION, measures: [{ ...BRIX, spreads: [sd(1)] }] })).toThrow('spreads for 1 zones');
  });

  it('answers for five zones and six measures fast enough for a slider', () => {
    const zones = Array.from({ length: 5 }, (_, i) => ({ zone: `${i}`, vines: 500 + 300 * i }));
    const measures = Array.from({ length: 6 }, (_, j) => ({ ...BRIX, code: `m${j}`, spreads: zones.map((_zone, i) => sd(0.8 + 0.1 * i + 0.05 * j)), expectedMeans: zones.map(() => 22) }));
    for (const question of ['eachZone', 'block'] as const) {
      planCounts({ ...QUESTION, zones, measures, question });
      const started = performance.now();
      planCounts({ ...QUESTION, zones, measures, question });
      expect(performance.now() - started).toBeLessThan(200);
    }
  });
});

describe('a budget instead of margins', () => {
  const budgets: Budget[] = [{ kind: 'hours', value: 3 }, { kind: 'vines', value: 60 }, { kind: 'money', value: 150 }];

  it('spends no more than there is, and a tighter margin would', () => {
    for (const kind of ['eachZone', 'block'] as const)
      for (const budget of budgets) {
        const question = { ...QUESTION, question: kind };
        const answer = planForBudget(question, budget);
        if (answer.kind !== 'plan') throw new Error('the budget pays for the minimum');
        expect(spent(answer.plan, budget.kind)).toBeLessThanOrEqual(budget.value);
        const tighter = { ...question, measures: question.measures.map((measure) => ({ ...measure, margin: { ...measure.margin, value: measure.margin.value * answer.scale * (1 - 1e-4) } })) };
        expect(spent(planCounts(tighter), budget.kind)).toBeGreaterThan(budget.value);
      }
  });

  it('agrees with the plan: what the plan costs buys the plan', () => {
    const plan = planCounts(QUESTION);
    for (const kind of ['hours', 'vines', 'money'] as const) {
      const answer = planForBudget(QUESTION, { kind, value: spent(plan, kind) });
      if (answer.kind !== 'plan') throw new Error('the budget pays for the minimum');
      expect(answer.scale).toBeLessThanOrEqual(1);
      expect(answer.plan.visits).toBe(plan.visits);
      expect(spent(answer.plan, kind)).toBeCloseTo(spent(plan, kind), 9);
    }
  });

  it('says what the minimum costs when the budget is too small, and notices when it pays for every vine', () => {
    expect(planForBudget(QUESTION, { kind: 'vines', value: 10 })).toEqual({ kind: 'tooSmall', least: 15 });
    const rich = planForBudget(QUESTION, { kind: 'vines', value: 2000 });
    expect(rich).toMatchObject({ kind: 'plan', everyVine: true });
    for (const value of [0, -1, Number.NaN]) expect(() => planForBudget(QUESTION, { kind: 'hours', value })).toThrow('budget must be above 0');
  });

  it('promises no margin that nobody asked for where it pays for every vine', () => {
    for (const kind of ['eachZone', 'block'] as const) {
      const question = { ...QUESTION, question: kind };
      const rich = planForBudget(question, { kind: 'hours', value: 1e9 });
      if (rich.kind !== 'plan') throw new Error('the budget pays for the minimum');
      expect(rich.plan.visits).toBe(1800);
      expect(planCounts({ ...question, measures: question.measures.map((measure) => ({ ...measure, margin: { ...measure.margin, value: measure.margin.value * rich.scale * 1.0001 } })) })).not.toEqual(rich.plan);
      // A zone of five vines is read whole at any margin: the margins stay as they were.
      const tiny = planForBudget({ ...question, zones: QUESTION.zones.map(({ zone }) => ({ zone, vines: 5 })) }, { kind: 'vines', value: 40 });
      expect(tiny).toMatchObject({ kind: 'plan', scale: 1, everyVine: true, plan: { visits: 15 } });
    }
  });

  it('knows nothing of a block with a zone of one vine that shall speak for more than itself', () => {
    const alone = planCounts({ ...QUESTION, question: 'block', measures: [{ ...BRIX, finiteShares: [0, 0, 0] }], zones: QUESTION.zones.map(({ zone }, i) => ({ zone, vines: i === 0 ? 1 : 300 })) });
    expect(alone.measures[0]!.reached).toBe(false);
    expect(alone.measures[0]!.blockHalfWidth).toBeNaN();
  });
});

describe('degrees of freedom of a pilot', () => {
  const pilots = [10, 12, 8].map((n) => ({ n, df: n - 1, spread: 1, mean: 22 }));
  const dfsOf = (zones: number, method: 'leastCost' | 'equal') => {
    const question: PlanQuestion = { ...QUESTION, zones: QUESTION.zones.slice(0, zones), question: 'block', method, measures: [{ ...BRIX, spreads: BRIX.spreads.slice(0, zones), expectedMeans: BRIX.expectedMeans.slice(0, zones), pilots: pilots.slice(0, zones) }] };
    return blockMaths(question, planCounts(question), BRIX.code)!.zones.map(({ pilotDf, pilotDfLost }) => [pilotDf, pilotDfLost]);
  };

  it('are one fewer a zone only where the spreads share the samples out, and the working says so', () => {
    expect(dfsOf(3, 'leastCost')).toEqual([[8, 1], [10, 1], [6, 1]]);
    expect(dfsOf(3, 'equal')).toEqual([[9, 0], [11, 0], [7, 0]]);
    // A lone zone has nothing to share.
    expect(dfsOf(1, 'leastCost')).toEqual([[9, 0]]);
  });
});

describe('counts against the margin', () => {
  it('falls with the margin and rises with the confidence', () => {
    const curves = tradeOffCurves(QUESTION, 'brix', { confidences: [0.9, 0.95, 0.98, 0.99] });
    expect(curves).toHaveLength(4);
    curves.forEach(({ points }, c) => {
      points.forEach((point, i) => {
        if (i > 0) expect(point.visits).toBeLessThanOrEqual(points[i - 1]!.visits);
        if (c > 0) expect(point.visits).toBeGreaterThanOrEqual(curves[c - 1]!.points[i]!.visits);
      });
    });
    // R 4.2.2: 21 + 13 + 34 at 95 % and 0.5
    expect(tradeOffCurves(QUESTION, 'brix', { confidences: [0.95], margins: [0.5] })[0]!.points[0]!.visits).toBe(68);
    expect(() => tradeOffCurves(QUESTION, 'sugar', { confidences: [0.95] })).toThrow('no measure "sugar"');
  });

  it('keeps both ends of the ladder', () => {
    const ladder = marginLadder(0.1, 0.9, 5);
    expect(ladder[0]).toBe(0.1);
    expect(ladder[4]).toBeCloseTo(0.9, 12);
  });

  it('draws four curves over five zones quickly', () => {
    const zones = Array.from({ length: 5 }, (_, i) => ({ zone: `${i}`, vines: 500 + 300 * i }));
    const measure = { ...BRIX, spreads: zones.map(() => sd(1.1)), expectedMeans: zones.map(() => 22) };
    for (const question of ['eachZone', 'block'] as const) {
      const started = performance.now();
      tradeOffCurves({ ...QUESTION, zones, measures: [measure], question }, 'brix', { confidences: [0.9, 0.95, 0.98, 0.99] });
      expect(performance.now() - started).toBeLessThan(1500); // some 60 ms alone; other work on the machine may slow it
    }
  });
});

describe('impractical wishes', () => {
  const greedy: PlanQuestion = { ...QUESTION, measures: [{ ...BRIX, margin: { kind: 'absolute', value: 0.3 }, confidence: 0.99 }] };
  const confidences = [0.9, 0.95, 0.98, 0.99];

  it('are silent while the plan is within its limits', () => {
    expect(adviseImpractical({ question: QUESTION, plan: planCounts(QUESTION), confidences })).toBeNull();
  });

  it('come with a margin, a confidence and a pair of zones that would help, in figures', () => {
    const plan = planCounts(greedy);
    // Sampled as one: by hand, the two smaller zones' figures put together by mergedFigures (tested below and in pooledZones).
    const pooledOf = (one: string, other: string): PlanQuestion => {
      const at = [one, other].map((name) => greedy.zones.findIndex(({ zone }) => zone === name));
      const rest = <T>(items: readonly T[]) => items.filter((_, i) => !at.includes(i));
      const zones = [...rest(greedy.zones), { zone: `${one} + ${other}`, vines: at.reduce((sum, i) => sum + greedy.zones[i]!.vines, 0) }];
      const measures = greedy.measures.map((measure) => {
        const { spread, mean } = mergedFigures(at.map((i) => ({ vines: greedy.zones[i]!.vines, spread: measure.spreads[i]!, mean: measure.expectedMeans[i]! })));
        return { ...measure, spreads: [...rest(measure.spreads), spread], expectedMeans: [...rest(measure.expectedMeans), mean] };
      });
      return { ...greedy, zones, measures };
    };
    const advice = adviseImpractical({ question: greedy, plan, confidences, pooled: pooledOf, limits: { visitsPerZone: 60, hours: null } })!;
    expect(advice.zonesOver).toEqual(['1', '3']);
    const wider = advice.options.find((option) => option.kind === 'widerMargin')!;
    expect(wider.fits).toBe(true);
    expect(wider.scale).toBeGreaterThan(1);
    const again = planCounts({ ...greedy, measures: [{ ...greedy.measures[0]!, margin: wider.margins[0]!.margin }] });
    expect(Math.max(...again.zones.map(({ visits }) => visits))).toBe(60);
    const lower = advice.options.find((option) => option.kind === 'lowerConfidence')!;
    expect(lower.confidence).toBeLessThan(0.99);
    const pooled = advice.options.find((option) => option.kind === 'poolZones')!;
    expect(pooled.visits).toBeLessThan(plan.visits * 1.5);
  });

  it('counts hours too', () => {
    const plan = planCounts(QUESTION);
    const advice = adviseImpractical({ question: QUESTION, plan, confidences, limits: { visitsPerZone: 60, hours: plan.hours / 2 } })!;
    expect(advice).toMatchObject({ hoursOver: true, zonesOver: [] });
    const wider = advice.options.find((option) => option.kind === 'widerMargin')!;
    expect(wider.hours).toBeLessThanOrEqual(plan.hours / 2);
  });

  it('offers nothing that would not help: where the least number per zone alone takes too long, no option is left', () => {
    const plan = planCounts({ ...QUESTION, minimum: 40 });
    const advice = adviseImpractical({ question: { ...QUESTION, minimum: 40 }, plan, confidences, pooled: () => ({ ...QUESTION, minimum: 40 }), limits: { visitsPerZone: 60, hours: plan.hours / 2 } })!;
    expect(plan.zones.map(({ visits }) => visits)).toEqual([40, 40, 40]);
    expect(advice).toMatchObject({ hoursOver: true, options: [] });
  });

  it('widens the spread of pooled zones by the difference of their means', () => {
    // By hand: half and half, sd 1 each, means 2 apart → variance 1 + 1
    expect(mergedSpread([{ vines: 10, sd: 1, mean: 20 }, { vines: 10, sd: 1, mean: 22 }])).toBeCloseTo(Math.SQRT2, 12);
    expect(mergedSpread([{ vines: 10, sd: 1, mean: null }, { vines: 10, sd: 2, mean: 22 }])).toBeCloseTo(Math.sqrt(2.5), 12);
    const merged = mergedFigures([0, 1].map((i) => ({ vines: QUESTION.zones[i]!.vines, spread: CLUSTERS.spreads[i]!, mean: CLUSTERS.expectedMeans[i]! })));
    // By hand: mean 28.8; sds 7 and 7.5 with weights 0.6 and 0.4; between 0.24 · 4
    expect(merged.mean).toBeCloseTo(28.8, 12);
    expect(merged.spread.value).toBeCloseTo(Math.sqrt(0.6 * 49 + 0.4 * 56.25 + 0.24 * 4) / 28.8, 12);
  });
});

describe('dividing a zone', () => {
  const vines = Array.from({ length: 400 }, (_, i) => i / 400);

  function readings(random: () => number, centre: (layer: number) => number): LocatedReading[] {
    return Array.from({ length: 40 }, (_, i) => {
      const layer = (i + 0.5) / 40;
      return { layer, visit: '2026-09-01', value: centre(layer) + 0.7 * randomNormal(random) };
    });
  }

  it('is advised when the zone is two populations', () => {
    const random = seededRandom(4);
    const two = readings(random, (layer) => (layer < 0.4 ? 20 : 24));
    const division = bestDivision({ readings: two, layerAtVines: vines, margin: 0.5, confidence: 0.95, presentCount: 66 })!;
    expect(division.cut).toBeGreaterThan(0.35);
    expect(division.cut).toBeLessThan(0.45);
    expect(division.recommended).toBe(true);
    expect(division.vines[0] + division.vines[1]).toBe(400);
    const [low, high] = partMeans([two.filter(({ layer }) => layer <= division.cut), two.filter(({ layer }) => layer > division.cut)]);
    expect(high - low).toBeGreaterThan(3);
  });

  it('promises the counts of parts that follow rows, not those of the line of the layer', () => {
    const two = readings(seededRandom(4), (layer) => (layer < 0.4 ? 20 : 24));
    const demand = { margin: 0.5, confidence: 0.95, presentCount: 66 };
    const onLine = bestDivision({ ...demand, readings: two, layerAtVines: vines })!;
    const sides = [two.filter(({ layer }) => layer <= onLine.cut), two.filter(({ layer }) => layer > onLine.cut)] as const;
    expect(judgeParts(demand, { cut: onLine.cut, sides, vines: onLine.vines })).toEqual(onLine);
    // A run along the row takes two vines of the poor part into the rich one: readings 4 apart beside a spread of 0.7.
    const drawn = judgeParts(demand, { cut: onLine.cut, sides: [sides[0].slice(0, -2), [...sides[0].slice(-2), ...sides[1]]], vines: [onLine.vines[0] - 20, onLine.vines[1] + 20] })!;
    expect(drawn.spreads[1]).toBeGreaterThan(1.3 * onLine.spreads[1]);
    expect(drawn.counts[1]).toBeGreaterThan(1.5 * onLine.counts[1]);
    expect(drawn.total).toBe(drawn.counts[0] + drawn.counts[1]);
    expect(drawn.saving).toBeCloseTo(1 - drawn.total / 66, 12);
    expect(judgeParts(demand, { cut: onLine.cut, sides, vines: [79, 321] })).toBeNull();
  });

  it('leaves out of a part what its plan leaves out, so that both ask for the same', () => {
    const two = readings(seededRandom(4), (layer) => (layer < 0.4 ? 20 : 27));
    const demand = { margin: 0.5, confidence: 0.95, presentCount: 66, outliers: 'out' as const, resolution: 0.1 };
    // A run along the row takes two vines of the poor part into the rich one, where they lie far off.
    const sides = [two.slice(0, 14), two.slice(14)] as const;
    const drawn = judgeParts(demand, { cut: 0.35, sides, vines: [140, 260] })!;
    const clean = judgeParts(demand, { cut: 0.35, sides: [two.slice(0, 14), two.slice(16)], vines: [140, 260] })!;
    expect(drawn.counts).toEqual(clean.counts);
    expect(judgeParts({ ...demand, outliers: 'in' }, { cut: 0.35, sides, vines: [140, 260] })!.counts[1]).toBeGreaterThan(1.5 * drawn.counts[1]);
  });

  it('is hardly ever advised when the readings only scatter', () => {
    const random = seededRandom(9);
    const advised = { in: 0, out: 0 };
    for (let trial = 0; trial < 200; trial++) {
      const noise = readings(random, () => 22);
      for (const outliers of ['in', 'out'] as const) {
        const division = bestDivision({ readings: noise, layerAtVines: vines, margin: 0.25, confidence: 0.95, presentCount: 33, outliers });
        if (division!.recommended) advised[outliers] += 1;
      }
    }
    expect(advised.in).toBeLessThanOrEqual(2);
    expect(advised.out).toBeLessThanOrEqual(2);
  });

  it('does not mistake two visits for two populations', () => {
    const random = seededRandom(2);
    const visits = readings(random, () => 22).map((reading, i) => (i % 2 === 0 ? reading : { ...reading, visit: '2026-09-08', value: reading.value + 3 }));
    const division = bestDivision({ readings: visits, layerAtVines: vines, margin: 0.25, confidence: 0.95, presentCount: 33 })!;
    expect(division.recommended).toBe(false);
    expect(Math.max(...division.spreads)).toBeLessThan(1.2);
  });

  it('counts fewer when only the mean of the whole zone is wanted', () => {
    const two = readings(seededRandom(4), (layer) => (layer < 0.4 ? 20 : 24));
    const ask = { readings: two, layerAtVines: vines, margin: 0.5, confidence: 0.95, presentCount: 66 };
    expect(bestDivision({ ...ask, wanted: 'whole' })!.total).toBeLessThan(bestDivision(ask)!.total);
  });

  it('is not judged from a handful of readings', () => {
    const few = readings(seededRandom(1), () => 22).slice(0, 10);
    expect(bestDivision({ readings: few, layerAtVines: vines, margin: 0.5, confidence: 0.95, presentCount: 40 })).toBeNull();
  });

  it('is offered with its figures in the advice, and recommended only when it saves a fifth', () => {
    const two = readings(seededRandom(4), (layer) => (layer < 0.4 ? 20 : 24));
    const question: PlanQuestion = { ...QUESTION, zones: [{ zone: '1', vines: 400 }], measures: [{ ...BRIX, spreads: [sd(2.1)], expectedMeans: [22.4], margin: { kind: 'absolute', value: 0.5 } }] };
    const plan = planCounts(question);
    const division = bestDivision({ readings: two, layerAtVines: vines, margin: 0.5, confidence: 0.95, presentCount: plan.zones[0]!.visits })!;
    const advice = adviseImpractical({ question, plan, confidences: [0.9, 0.95], limits: { visitsPerZone: 50, hours: null }, divisions: [{ zone: '1', division }] })!;
    const option = advice.options.find((candidate) => candidate.kind === 'divideZone')!;
    expect(option).toMatchObject({ recommended: true, fits: true, visits: division.total });
    expect(option.saving).toBeGreaterThanOrEqual(0.2);
    // Who asks for more than it saves is not advised to divide; who asks for a little less is.
    const asked = (worthDividing: number) => adviseImpractical({ question, plan, confidences: [0.9], limits: { visitsPerZone: 50, hours: null, worthDividing }, divisions: [{ zone: '1', division }] })!.options.find(({ kind }) => kind === 'divideZone')!;
    expect(asked(division.saving + 0.01)).toMatchObject({ recommended: false, visits: division.total });
    expect(asked(division.saving - 0.01)).toMatchObject({ recommended: true });
  });
});
