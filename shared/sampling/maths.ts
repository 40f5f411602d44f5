import { totalVines } from './allocate.ts';
import { blockPrecision } from './blockSampleSize.ts';
import { matchMargin } from './margins.ts';
import type { PlanCounts } from './planCounts.ts';
import { blockDemand, type PlanQuestion } from './planQuestion.ts';
import { criticalT } from './quantiles.ts';
import { halfWidth as halfWidthOf, sampleSizeSteps, steinSampleSize } from './sampleSize.ts';
import { spreadOf } from './severalMeasures.ts';

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
  /** Share of the variance that reading every vine would take away. */
  readonly finiteShare: number;
  /** Where a pilot decides: its vines, and (t·s₁/E)² before rounding, without end and among the vines there are. */
  readonly pilot: { readonly n: number; readonly unrounded: number; readonly inPopulation: number } | null;
}

export interface BlockMaths {
  readonly zones: readonly { readonly zone: string; readonly weight: number; readonly spread: number; readonly n: number; readonly vines: number; readonly finiteShare: number }[];
  readonly variance: number;
  readonly df: number;
  readonly t: number;
  readonly halfWidth: number;
}

/** Per zone: the smallest n with t·s/√n·√(1 − f·n/N) ≤ E, and every number in it. */
export function zoneMaths(question: PlanQuestion, code: string): ZoneMaths[] {
  const measure = question.measures.find((one) => one.code === code)!;
  return question.zones.map(({ zone, vines }, i) => {
    const { spread, margin } = matchMargin(measure.spreads[i]!, measure.margin, measure.expectedMeans[i]!);
    const finiteShare = measure.finiteShares?.[i] ?? 1;
    const steps = sampleSizeSteps({ spread, margin, confidence: measure.confidence, populationSize: vines, finiteShare, ...(question.minimum === undefined ? {} : { minimum: question.minimum }) });
    const { n, df, t, halfWidth, halfWidthOneFewer, normal, normalInPopulation, limitedBy } = steps;
    const facts = { zone, vines, spread, margin, finiteShare, normal, normalInPopulation };
    const pilot = measure.pilots?.[i];
    if (!pilot) return { ...facts, n, df, t, halfWidth, oneFewer: halfWidthOneFewer, limitedBy, pilot: null };
    const two = steinSampleSize({ pilotN: pilot.n, pilotDf: pilot.df, pilotSpread: spread, margin, confidence: measure.confidence, populationSize: vines, finiteShare });
    return {
      ...facts, n: two.total, df: pilot.df, t: criticalT(measure.confidence, pilot.df), oneFewer: Number.NaN, limitedBy: 'margin',
      halfWidth: halfWidthOf({ spread, n: two.total, confidence: measure.confidence, populationSize: vines, finiteShare, df: pilot.df }),
      pilot: { n: pilot.n, unrounded: two.unrounded, inPopulation: two.inPopulation },
    };
  });
}

/** Of the mean over all zones: t·√ΣW²s²(1/n − 1/N) with the counts of the plan. Null where spreads and margin have no common scale. */
export function blockMaths(question: PlanQuestion, counts: PlanCounts, code: string): BlockMaths | null {
  const at = question.measures.findIndex((one) => one.code === code);
  const measure = question.measures[at]!;
  const isShare = measure.spreads.every(({ kind }) => kind === 'cv') && measure.margin.kind === 'relative';
  if (!isShare && measure.expectedMeans.includes(null) && measure.spreads.some(({ kind }) => kind === 'cv')) return null;
  const demand = blockDemand(question, measure);
  const zones = question.zones.map(({ vines }, i) => ({ vines, ...spreadOf(demand, i) }));
  const taken = counts.zones.map((zone) => zone.counts[at]!);
  const { variance, df, halfWidth } = blockPrecision(zones, taken, { confidence: measure.confidence });
  const all = totalVines(zones);
  return {
    zones: question.zones.map(({ zone, vines }, i) => ({ zone, weight: vines / all, spread: zones[i]!.sd, n: taken[i]!, vines, finiteShare: zones[i]!.finiteShare ?? 1 })),
    variance, df, t: criticalT(measure.confidence, df), halfWidth,
  };
}
