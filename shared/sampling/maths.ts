import { allocationVariance, totalVines } from './allocate.ts';
import { blockPrecision } from './blockSampleSize.ts';
import { matchMargin } from './margins.ts';
import type { PlanCounts, PlanQuestion } from './planCounts.ts';
import { criticalT } from './quantiles.ts';
import { sampleSizeSteps, steinSampleSize } from './sampleSize.ts';

/** The numbers of a plan's formulas, one measure at a time, for whoever wants to check them by hand. */
export interface ZoneMaths {
  readonly zone: string;
  /** Vines in the zone, N. */
  readonly vines: number;
  /** Samples that this measure asks for, before others on the same walk. */
  readonly n: number;
  readonly spread: number;
  readonly margin: number;
  readonly t: number;
  readonly df: number;
  readonly halfWidth: number;
  /** With one vine fewer; NaN where that says nothing. */
  readonly oneFewer: number;
  /** First guess with the spread taken as known: (z·s/E)², and the same in N vines. */
  readonly normal: number;
  readonly normalInPopulation: number;
  readonly limitedBy: 'margin' | 'minimum' | 'population';
  /** Where a pilot decides: its vines, and (t·s₁/E)² before rounding. */
  readonly pilot: { readonly n: number; readonly unrounded: number } | null;
}

export interface BlockMaths {
  readonly zones: readonly { readonly zone: string; readonly weight: number; readonly spread: number; readonly n: number; readonly vines: number }[];
  readonly variance: number;
  readonly df: number;
  readonly t: number;
  readonly halfWidth: number;
}

/** Per zone: the smallest n with t·s/√n·√(1 − n/N) ≤ E, and every number in it. */
export function zoneMaths(question: PlanQuestion, code: string): ZoneMaths[] {
  const measure = question.measures.find((one) => one.code === code)!;
  return question.zones.map(({ zone, vines }, i) => {
    const { spread, margin } = matchMargin(measure.spreads[i]!, measure.margin, measure.expectedMeans[i]!);
    const steps = sampleSizeSteps({ spread, margin, confidence: measure.confidence, populationSize: vines, ...(question.minimum === undefined ? {} : { minimum: question.minimum }) });
    const { n, df, t, halfWidth, halfWidthOneFewer, normal, normalInPopulation, limitedBy } = steps;
    const facts = { zone, vines, spread, margin, normal, normalInPopulation };
    const pilot = measure.pilots?.[i];
    if (!pilot) return { ...facts, n, df, t, halfWidth, oneFewer: halfWidthOneFewer, limitedBy, pilot: null };
    const two = steinSampleSize({ pilotN: pilot.n, pilotDf: pilot.df, pilotSpread: spread, margin, confidence: measure.confidence, populationSize: vines });
    const fixedT = criticalT(measure.confidence, pilot.df);
    return { ...facts, n: two.total, df: pilot.df, t: fixedT, halfWidth: (fixedT * spread) / Math.sqrt(two.total), oneFewer: Number.NaN, limitedBy: 'margin', pilot: { n: pilot.n, unrounded: two.unrounded } };
  });
}

/** Of the mean over all zones: t·√ΣW²s²(1/n − 1/N) with the counts of the plan. Null where spreads and margin have no common scale. */
export function blockMaths(question: PlanQuestion, counts: PlanCounts, code: string): BlockMaths | null {
  const at = question.measures.findIndex((one) => one.code === code);
  const measure = question.measures[at]!;
  const isShare = measure.spreads.every(({ kind }) => kind === 'cv') && measure.margin.kind === 'relative';
  if (!isShare && measure.expectedMeans.includes(null) && measure.spreads.some(({ kind }) => kind === 'cv')) return null;
  const sds = measure.spreads.map((spread, i) => (isShare ? spread.value : matchMargin(spread, { kind: 'absolute', value: 1 }, measure.expectedMeans[i]!).spread));
  const zones = question.zones.map(({ vines }, i) => ({ vines, sd: sds[i]! }));
  const taken = counts.zones.map((zone) => zone.counts[at]!);
  const { variance, df, halfWidth } = blockPrecision(zones, taken, { confidence: measure.confidence });
  const all = totalVines(zones);
  return {
    zones: question.zones.map(({ zone, vines }, i) => ({ zone, weight: vines / all, spread: sds[i]!, n: taken[i]!, vines })),
    variance: allocationVariance(zones, taken) || variance, df, t: criticalT(measure.confidence, df), halfWidth,
  };
}
