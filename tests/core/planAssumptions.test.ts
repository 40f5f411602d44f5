import { describe, expect, it } from 'vitest';
import { seededRandom } from '../../shared/analysis/random.ts';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import { handful, planChoices } from '../../shared/contracts/planChoices.ts';
import { adviseHandful, betweenVines, handfulSeconds, handfulSpread } from '../../shared/sampling/handful.ts';
import { blockMaths } from '../../shared/sampling/blockMaths.ts';
import { zoneMaths } from '../../shared/sampling/maths.ts';
import { pilotReadingsOf } from '../../shared/sampling/pilotReadings.ts';
import { answerBudget, answerPlan } from '../../shared/sampling/plan.ts';
import { criticalT } from '../../shared/sampling/quantiles.ts';

const spread = (value: number) => ({ kind: 'sd' as const, value, cautious: value * 1.2, source: 'trade' as const, n: 0, seasons: [], df: null, outliers: 0, withOutliers: null, withoutOutliers: null, expectedMean: 22, isMeanAssumed: true });
/** Sugar in zones of 900, 600 and 300 vines with spreads 1.1, 0.8, 1.5: the worked example of stratified sampling in allocate.test.ts. */
function basis(pilots: PlanBasis['measures'][number]['pilots'] = [null, null, null]): PlanBasis {
  return {
    zoningId: '', zoningNumber: 1, blockId: '', blockName: '', seasonId: '', seasonName: '', pilot: null,
    zones: [900, 600, 300].map((vines, i) => ({ id: '', number: i + 1, name: '', colour: null, vines, eligible: vines })),
    measures: [{ code: 'brix', name: '', unit: '°Brix', decimals: 1, margin: 0.5, marginKind: 'absolute', confidence: 0.95, secondsPerSample: 60, skewed: false, measuredIn: 'lab', sampledUnit: 'vine', rowSide: 'either', tradeSource: '', spreads: [1.1, 0.8, 1.5].map(spread), pilots }],
    walks: [], isWalkLaid: false, settings: { floorVines: 2, impracticalSamples: 60, dayHours: 8, costPerHour: 20, currency: 'EUR' },
  };
}
const choices = (over: object = {}, plan: object = {}) => planChoices.parse({ measures: [{ code: 'brix', ...over }], ...plan });
const visits = (ask: PlanBasis, how = choices()) => answerPlan(ask, how).counts.zones.map((zone) => zone.visits);

describe('a plan after its pilot', () => {
  // Stein 1945; Cochran 1977 §§4.6–4.7: n₁ 10, s₁ 1.2, E 0.5, 95 % → 29.475965, of 900 vines 29.475965/(1 + 29.475965/900) = 28.541
  // → 29 (30 where no vines run out); n₁ 15, s₁ 0.5 → stays at 15.
  const read = basis([{ n: 10, df: 9, spread: 1.2, mean: 22 }, { n: 15, df: 14, spread: 0.5, mean: 22 }, null]);

  it('takes the two-stage rule where the pilot read, and the assumed spread elsewhere', () => {
    expect(visits(read, planChoices.parse({ ...choices(), afterPilot: true }))).toEqual([29, 15, visits(basis())[2]]);
    expect(visits(read, planChoices.parse({ ...choices(), afterPilot: true, population: 'endless' }))[0]).toBe(30);
  });

  it('keeps the width that the rule promises: t of the pilot, its spread, all the vines', () => {
    const { counts } = answerPlan(read, planChoices.parse({ ...choices(), afterPilot: true }));
    // t(0.975, 9) = 2.262157 (R): 2.262157 · 1.2 / √29 · √(1 − 29/900).
    expect(counts.zones[0]!.halfWidths[0]).toBeCloseTo(((2.262157163 * 1.2) / Math.sqrt(29)) * Math.sqrt(1 - 29 / 900), 8);
    expect(counts.zones[0]!.halfWidths[0]).toBeLessThanOrEqual(0.5);
  });

  it('counts with the pilot only when asked, and never with a spread that somebody typed', () => {
    expect(visits(read)).toEqual(visits(basis()));
    expect(visits(read, planChoices.parse({ measures: [{ code: 'brix', spreads: { 1: 1.1 } }], afterPilot: true }))[0]).toBe(visits(basis())[0]);
  });

  it('pools the pilot within its visits and says nothing of a zone with one vine', () => {
    const reading = (zone: string, visit: string, value: number) => ({ block: 'b', zone, season: 2026, visit, value });
    // Two visits, each with variance 2: pooled 2, two degrees of freedom; the rise between the visits is no spread.
    const readings = [reading('1', 'a', 20), reading('1', 'a', 22), reading('1', 'b', 30), reading('1', 'b', 32), reading('2', 'a', 21)];
    const [first, second] = pilotReadingsOf(readings, { zones: ['1', '2'], kind: 'sd', season: 2026 });
    expect(first).toMatchObject({ n: 4, df: 2 });
    expect(first!.spread).toBeCloseTo(Math.SQRT2, 12);
    expect(second).toBeNull();
  });
});

describe('assumptions that a planner changes', () => {
  it('a typed spread changes its zone and no other', () => {
    const [one, two, three] = visits(basis());
    const typed = visits(basis(), choices({ spreads: { 2: 1.5 } }));
    expect([typed[0], typed[2]]).toEqual([one, three]);
    expect(typed[1]).toBeGreaterThan(two!);
  });

  it('a typed mean turns a share of the mean into the unit, in its zone and no other', () => {
    const share = { margin: 0.02, marginKind: 'relative' };
    // 2 % of 22 is 0.44 °Brix, of 11 it is 0.22.
    expect(visits(basis(), choices(share))).toEqual(visits(basis(), choices({ margin: 0.44 })));
    const typed = choices({ ...share, means: { 2: 11 } });
    expect(visits(basis(), typed)).toEqual([0.44, 0.22, 0.44].map((margin, i) => visits(basis(), choices({ margin }))[i]));
    expect(zoneMaths(answerPlan(basis(), typed).question, 'brix')[1]!.conversion).toEqual({ of: 'margin', share: 0.02, mean: 11 });
    // Where margin and spread are both in the unit no count rests on the mean.
    expect(visits(basis(), choices({ means: { 2: 11 } }))).toEqual(visits(basis()));
  });

  it('both directions agree: the hours, vines or money of a plan buy its margins', () => {
    const plan = answerPlan(basis(), choices());
    for (const [kind, value] of [['hours', plan.counts.hours], ['vines', plan.counts.visits], ['money', plan.counts.money]] as const) {
      const bought = answerBudget(basis(), choices(), { kind, value });
      expect(bought.kind === 'plan' && bought.plan.visits).toBe(plan.counts.visits);
      expect(bought.kind === 'plan' && bought.scale).toBeLessThanOrEqual(1 + 1e-4);
    }
  });
});

/** Cochran 1977 §5.4: ΣW²S²(1/n − 1/N) with t at Satterthwaite's degrees of freedom, over all counts of the worked example that could cost less; ±0.3 at 95 %. */
function leastCostByHand(costs: readonly number[]): number {
  const [vines, spreads] = [[900, 600, 300], [1.1, 0.8, 1.5]];
  let least = Infinity;
  for (let a = 2; a <= 80; a++)
    for (let b = 2; b <= 60; b++)
      for (let c = 2; c <= 40; c++) {
        const counts = [a, b, c];
        const cost = counts.reduce((sum, n, i) => sum + n * costs[i]!, 0);
        if (cost >= least) continue;
        const parts = counts.map((n, i) => (vines[i]! / 1800) ** 2 * spreads[i]! ** 2 * (1 / n - 1 / vines[i]!));
        const variance = parts.reduce((sum, part) => sum + part, 0);
        if (variance > (0.3 / 1.96) ** 2) continue;
        const df = variance ** 2 / parts.reduce((sum, part, i) => sum + part ** 2 / (counts[i]! - 1), 0);
        if (criticalT(0.95, df) * Math.sqrt(variance) <= 0.3) least = cost;
      }
  return least;
}

describe('what a vine costs', () => {
  const block = (over: object = {}) => planChoices.parse({ measures: [{ code: 'brix', margin: 0.3 }], question: 'block', ...over });

  it('takes fewer vines where they cost more, and its counts are the cheapest of all there are', () => {
    const ask = basis();
    for (const more of [0, 30, 200, 600]) {
      const dear = { zoneSeconds: { 3: more } };
      const found = answerPlan(ask, block({ allocation: 'leastCost', ...dear })).counts;
      expect(found.hours * 3600).toBeCloseTo(leastCostByHand([75, 75, 75 + more]), 6);
      expect(found.hours * 3600).toBeCloseTo(found.zones.reduce((sum, { visits: n }, i) => sum + n * [75, 75, 75 + more][i]!, 0), 6);
    }
    for (const allocation of ['leastCost', 'spreadAndCost'] as const) expect(visits(ask, block({ allocation, zoneSeconds: { 3: 600 } }))[2]).toBeLessThan(visits(ask, block({ allocation }))[2]!);
  });

  it('the speed on foot, the slopes and the seconds at a vine change the hours, never the count of a zone', () => {
    const walked: PlanBasis = { ...basis(), walks: [{ vines: 6, levelS: 600, slopedS: 800 }, { vines: 90, levelS: 3000, slopedS: 4200 }] };
    const hours = (over: object = {}) => answerPlan(walked, choices({}, over)).counts;
    const usual = hours();
    // 3.01 km/h is 0.8361 m/s; the trial walks are at 0.836
    const onFoot = (slow: number) => hours({ pace: { kmPerHour: 3.0096 / slow, onSlopes: false } }).walkingHours;
    expect(onFoot(2)).toBeCloseTo(2 * onFoot(1), 9);
    expect(usual.walkingHours).toBeGreaterThan(onFoot(1) * 1.2);
    expect(usual.hours).toBeCloseTo(usual.walkingHours + (usual.visits * (15 + 60)) / 3600, 9);
    expect(hours({ secondsPerVine: 45 }).hours).toBeCloseTo(usual.hours + (usual.visits * 30) / 3600, 9);
    expect(hours({ pace: { kmPerHour: 1 } }).zones.map((zone) => zone.visits)).toEqual(usual.zones.map((zone) => zone.visits));
    expect(usual.zones.reduce((sum, zone) => sum + zone.hours, 0)).toBeCloseTo(usual.hours, 9);
  });

  it('from a margin to its cost and back, from a budget to its margin and back: one plan', () => {
    const random = seededRandom(31);
    for (let round = 0; round < 40; round++) {
      const walked: PlanBasis = { ...basis(), walks: [{ vines: 6, levelS: 200 + 900 * random(), slopedS: 1200 }, { vines: 90, levelS: 2400 + 3000 * random(), slopedS: 6000 }] };
      const how = choices({ margin: 0.25 + random(), confidence: [0.9, 0.95, 0.98, 0.99][round % 4] }, { question: round % 2 === 0 ? 'eachZone' : 'block', pace: { onSlopes: false, kmPerHour: 1 + 4 * random() } });
      const plan = answerPlan(walked, how).counts;
      for (const [kind, spent] of [['hours', plan.hours], ['vines', plan.visits], ['money', plan.money]] as const) {
        const bought = answerBudget(walked, how, { kind, value: spent });
        if (bought.kind !== 'plan') throw new Error('a plan buys itself');
        expect(bought.plan.visits).toBe(plan.visits);
        expect(bought.scale).toBeLessThanOrEqual(1 + 1e-4);
        // the margin found, asked for by itself, costs what was given for it
        const again = answerPlan(walked, { ...how, measures: [{ ...how.measures[0]!, margin: how.measures[0]!.margin! * bought.scale }] }).counts;
        expect(again.visits).toBe(plan.visits);
        expect(again.hours).toBeCloseTo(plan.hours, 9);
      }
    }
  });
});

describe('how much of each vine', () => {
  // Rankine, Cellier & Boehm 1962: S_b² 1.0625, S_w² 0.50, so 1.25 for one cluster a vine.
  const rankine = handful.parse({ withinVine: Math.sqrt(0.5) });
  const whole = Math.sqrt(1.0625 + 0.5);

  it('finds the part between vines and the spread with more clusters', () => {
    expect(betweenVines(whole, rankine)).toBeCloseTo(1.0625, 12);
    expect(handfulSpread(whole, rankine)).toBeCloseTo(whole, 12);
    expect(handfulSpread(whole, { ...rankine, perVine: 2 })).toBeCloseTo(Math.sqrt(1.0625 + 0.25), 12);
    expect(handfulSpread(whole, { ...rankine, perVine: 2, nowPerVine: 2 })).toBeCloseTo(whole, 12);
    // The published statement: as good a mean from 1 cluster on each of 25 vines as from 2 on each of 21.
    expect((1.0625 + 0.5) / 25).toBeCloseTo(handfulSpread(whole, { ...rankine, perVine: 2 }) ** 2 / 21, 12);
  });

  it('takes one cluster where walking costs four times a cluster, as those figures say', () => {
    // m = √(0.5/1.0625 · 4) = 1.372 < 1.5.
    const split = adviseHandful({ spread: whole, handful: { ...rankine, secondsPerCluster: 10 }, margin: 0.5, confidence: 0.95, secondsPerVine: 40 });
    expect(split.best.perVine).toBeCloseTo(1.371989, 5);
    expect(split.perVine).toBe(1);
  });

  it('takes four clusters at 90 s a vine, 8 s a cluster and a spread ratio of 1.2', () => {
    const within = handful.parse({ withinVine: 1.2, secondsPerCluster: 8 });
    const split = adviseHandful({ spread: Math.sqrt(1 + 1.44), handful: within, margin: 0.5, confidence: 0.95, secondsPerVine: 90 });
    expect(split.best.perVine).toBeCloseTo(4.0249, 4);
    expect([3, 4]).toContain(split.perVine);
  });

  it('changes the count and the time of the plan', () => {
    const one = answerPlan(basis(), choices());
    const two = answerPlan(basis(), choices({ handful: { perVine: 4, withinVine: 0.7, secondsPerCluster: 15 } }));
    expect(two.counts.visits).toBeLessThan(one.counts.visits);
    expect(two.question.measures[0]!.secondsPerSample).toBe(60);
    expect(handfulSeconds(handful.parse({ withinVine: 1, perVine: 3, perCluster: 10, secondsPerCluster: 5, secondsPerBerry: 2 }))).toBe(75);
  });

  it('leaves unknown what differs within a vine when every vine has been read', () => {
    // Cochran 1977 §10.3: V = (1 − n/N) S_b²/n + S_w²/(nm). S² 1.21 of which S_w² 0.36, one cluster: half-width t·√((1 − n/N)·0.85 + 0.36)/√n.
    const small = { ...basis(), zones: basis().zones.map((zone) => ({ ...zone, vines: 40, eligible: 40 })) };
    const ask = planChoices.parse({ measures: [{ code: 'brix', handful: handful.parse({ withinVine: 0.6 }) }] });
    const { question, counts } = answerPlan(small, ask);
    const n = counts.zones[0]!.visits;
    const { t } = zoneMaths(question, 'brix')[0]!;
    const half = (taken: number, factor: number) => (factor * Math.sqrt((1 - taken / 40) * 0.85 + 0.36)) / Math.sqrt(taken);
    expect(counts.zones[0]!.halfWidths[0]).toBeCloseTo(half(n, t), 10);
    expect(counts.zones[0]!.halfWidths[0]).toBeLessThanOrEqual(0.5);
    // More than the vines would suggest if their fruit were known whole.
    expect(n).toBeGreaterThan(answerPlan(small, choices()).counts.zones[0]!.visits);
  });

  it('says in words when the clusters of a vine are said to differ more than all there is', () => {
    expect(() => handfulSpread(1, handful.parse({ withinVine: 1.1 }))).toThrow(/nothing between vines/);
  });
});

describe('the working that is shown', () => {
  it('gives each zone the numbers of its own t search', () => {
    // Cochran 1977 §4.6 with the t search: s 1.1 in 900 vines, E 0.5, 95 % → 21; without the population 22.
    const [first] = zoneMaths(answerPlan(basis(), choices()).question, 'brix');
    expect(first).toMatchObject({ n: 21, df: 20, vines: 900, limitedBy: 'margin', pilot: null });
    expect(first!.t).toBeCloseTo(2.085963, 6);
    expect(first!.halfWidth).toBeLessThanOrEqual(0.5);
    expect(first!.oneFewer).toBeGreaterThan(0.5);
  });

  it('gives the block its weighted variance', () => {
    const ask = planChoices.parse({ ...choices(), question: 'block', allocation: 'spread' });
    const { question, counts } = answerPlan(basis(), ask);
    const block = blockMaths(question, counts, 'brix')!;
    expect(block.zones.map(({ weight }) => weight)).toEqual([0.5, 600 / 1800, 300 / 1800]);
    const byHand = block.zones.reduce((sum, { weight, spread: s, n, vines }) => sum + weight ** 2 * s ** 2 * (1 / n - 1 / vines), 0);
    expect(block.variance).toBeCloseTo(byHand, 12);
    expect(block.halfWidth).toBeCloseTo(block.t * Math.sqrt(byHand), 10);
    expect(block.halfWidth).toBeLessThanOrEqual(0.5);
    // By hand: one fewer of 1.1, 0.8 and 1.5 shared by spread would miss the margin, and a vine costs 60 s and 15 s to set up.
    expect(block).toMatchObject({ margin: 0.5, marginMean: null, sharing: { rule: 'spread', seconds: [75, 75, 75] } });
    expect(block.sharing!.oneFewer).toBeGreaterThan(0.5);
  });

  it('says how spread and margin came to one unit', () => {
    // By hand: 2 % of 22 °Brix is 0.44.
    const share = choices({ marginKind: 'relative', margin: 0.02 });
    const { question, counts } = answerPlan(basis(), share);
    expect(zoneMaths(question, 'brix')[0]).toMatchObject({ margin: 0.44, conversion: { of: 'margin', share: 0.02, mean: 22 } });
    const block = answerPlan(basis(), planChoices.parse({ ...share, question: 'block' }));
    const found = blockMaths(block.question, block.counts, 'brix')!;
    expect(found.margin).toBeCloseTo(0.44, 12);
    expect(found.marginMean).toBeCloseTo(22, 12);
    expect(counts.zones[0]!.halfWidths[0]).toBeLessThanOrEqual(0.02);
  });

  it('gives the count of the plan also where few vines may be drawn or the floor decides', () => {
    const few = { ...basis(), zones: basis().zones.map((zone) => ({ ...zone, eligible: 12 })) };
    const { question, counts } = answerPlan(few, choices());
    const [first] = zoneMaths(question, 'brix');
    expect(first).toMatchObject({ n: 12, wanted: 21, df: 11, limitedBy: 'eligible' });
    expect(first!.halfWidth).toBeCloseTo(counts.zones[0]!.halfWidths[0]!, 12);
    const piloted = answerPlan(basis([{ n: 10, df: 9, spread: 0.2, mean: 22 }, null, null]), planChoices.parse({ ...choices(), afterPilot: true, minimum: 14 }));
    expect(zoneMaths(piloted.question, 'brix')[0]).toMatchObject({ n: 14, limitedBy: 'minimum', pilot: { n: 10 } });
    expect(piloted.counts.zones[0]!.visits).toBe(14);
  });

  it('names the rule that shared the counts of a block', () => {
    const ruleOf = (over: object) => {
      const { question, counts } = answerPlan(basis(), planChoices.parse({ ...choices(), question: 'block', ...over }));
      return blockMaths(question, counts, 'brix')!.sharing!;
    };
    for (const allocation of ['equal', 'area', 'spread', 'spreadAndCost'] as const) {
      expect(ruleOf({ allocation }).rule).toBe(allocation);
      expect(ruleOf({ allocation }).oneFewer).toBeGreaterThan(0.5);
    }
    expect(ruleOf({ allocation: 'leastCost', zoneSeconds: { 1: 200 } })).toMatchObject({ rule: 'leastCost', oneFewer: null, seconds: [275, 75, 75] });
    expect(ruleOf({ measures: [{ code: 'brix', margin: 8 }] }).rule).toBe('minimum');
    expect(ruleOf({ measures: [{ code: 'brix', margin: 1e-6 }] }).rule).toBe('everyVine');
    const { question, counts } = answerPlan(basis(), choices());
    expect(blockMaths(question, counts, 'brix')!.sharing).toBeNull();
  });
});
