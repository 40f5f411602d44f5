import { totalVines } from './allocate.ts';
import { allocationMethod, type AllocationMethodId } from './allocationMethods.ts';
import { blockPrecision } from './blockSampleSize.ts';
import type { PlanCounts } from './planCounts.ts';
import { sharedZones } from './planDraft.ts';
import { blockDemand, type PlanMeasure, type PlanQuestion } from './planQuestion.ts';
import { criticalT } from './quantiles.ts';
import { spreadOf } from './severalMeasures.ts';

/** The numbers of the formula for the mean over all zones, one measure at a time. */
export interface BlockMaths {
  readonly zones: readonly BlockZoneMaths[];
  readonly variance: number;
  readonly df: number;
  readonly t: number;
  readonly halfWidth: number;
  /** On the scale of the half-width. */
  readonly margin: number;
  /** The mean that the margin is a share of, where it had to be put in the unit. */
  readonly marginMean: number | null;
  /** How the counts came about; null where each zone keeps its own margin. */
  readonly sharing: Sharing | null;
}

export interface BlockZoneMaths {
  readonly zone: string;
  /** Share of all vines, W. */
  readonly weight: number;
  readonly spread: number;
  /** The mean that the spread is a share of, where it had to be put in the unit. */
  readonly spreadMean: number | null;
  readonly n: number;
  readonly vines: number;
  readonly finiteShare: number;
  /** Degrees of freedom of a pilot's spread; null where n − 1 hold. */
  readonly pilotDf: number | null;
  /** How many fewer these are than the pilot's own, because its spreads decide the shares too. */
  readonly pilotDfLost: number;
}

export interface Sharing {
  /** `together`: cheapest for several measures at once. `minimum`, `everyVine`: nothing was left to share. */
  readonly rule: AllocationMethodId | 'leastCost' | 'together' | 'minimum' | 'everyVine';
  /** Half-width with one sample fewer, shared by the same rule; null where no rule for totals shares. */
  readonly oneFewer: number | null;
  /** Seconds that a vine of each zone costs, as the sharing weighs them. */
  readonly seconds: readonly number[];
}

/** Of the mean over all zones: t·√ΣW²s²(1/n − 1/N) with the counts of the plan. Null where spreads and margin have no common scale. */
export function blockMaths(question: PlanQuestion, counts: PlanCounts, code: string): BlockMaths | null {
  const at = question.measures.findIndex((one) => one.code === code);
  const measure = question.measures[at]!;
  const asShares = measure.spreads.every(({ kind }) => kind === 'cv') && measure.margin.kind === 'relative';
  if (!asShares && measure.expectedMeans.includes(null) && (measure.margin.kind === 'relative' || measure.spreads.some(({ kind }) => kind === 'cv'))) return null;
  const demand = blockDemand(question, measure);
  const inUnits = !(asShares && measure.expectedMeans.includes(null));
  const zones = question.zones.map(({ vines }, i) => ({ vines, ...spreadOf(demand, i) }));
  const taken = counts.zones.map((zone) => zone.counts[at]!);
  const { variance, df, halfWidth } = blockPrecision(zones, taken, { confidence: measure.confidence });
  const all = totalVines(zones);
  return {
    zones: question.zones.map(({ zone, vines }, i) => ({
      zone, weight: vines / all, spread: zones[i]!.sd, n: taken[i]!, vines, finiteShare: zones[i]!.finiteShare ?? 1, pilotDf: zones[i]!.spreadDf,
      pilotDfLost: zones[i]!.spreadDf === null ? 0 : (measure.pilots?.[i]?.df ?? 0) - zones[i]!.spreadDf!,
      spreadMean: inUnits && measure.spreads[i]!.kind === 'cv' ? Math.abs(measure.expectedMeans[i]!) : null,
    })),
    variance, df, t: criticalT(measure.confidence, df), halfWidth,
    margin: demand.margin,
    marginMean: inUnits && measure.margin.kind === 'relative' ? demand.margin / measure.margin.value : null,
    sharing: question.question === 'block' ? sharingOf(question, measure, taken) : null,
  };
}

function sharingOf(question: PlanQuestion, measure: PlanMeasure, taken: readonly number[]): Sharing {
  const { method = 'leastCost', measures } = question;
  const demand = blockDemand(question, measure);
  const shared = sharedZones(question);
  const seconds = shared.map(({ cost = 1 }) => cost);
  const zones = shared.map((zone, i) => ({ ...zone, ...spreadOf(demand, i) }));
  const total = taken.reduce((sum, n) => sum + n, 0);
  const bounded = (bound: (zone: (typeof zones)[number]) => number) => taken.every((n, i) => n === bound(zones[i]!));
  if (bounded(({ minimum = 0, maximum = Infinity }) => Math.min(minimum, maximum))) return { rule: 'minimum', oneFewer: null, seconds };
  if (bounded(({ maximum = Infinity }) => maximum)) return { rule: 'everyVine', oneFewer: null, seconds };
  if (method === 'leastCost' && measures.length > 1) return { rule: 'together', oneFewer: null, seconds };
  const costsAlike = seconds.every((cost) => cost === seconds[0]);
  if (method === 'leastCost' && !costsAlike) return { rule: 'leastCost', oneFewer: null, seconds };
  const rule = method === 'leastCost' ? 'spread' : method;
  const fewer = blockPrecision(zones, allocationMethod(rule).counts(zones, total - 1), { confidence: measure.confidence });
  return { rule, oneFewer: fewer.halfWidth, seconds };
}
