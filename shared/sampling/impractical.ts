import { smallestScale } from './budget.ts';
import { WORTH_DIVIDING, type Division } from './divideZone.ts';
import type { Margin } from './margins.ts';
import { planCounts, type PlanCounts } from './planCounts.ts';
import type { PlanQuestion } from './planQuestion.ts';

/**
 * When a plan asks for more than a day's work or more vines than a zone should take, what would help, in figures.
 * The limits are the manager's; 60 a zone is a common view of where little more is gained (French trade press).
 */
export interface PracticalLimits {
  readonly visitsPerZone: number;
  /** A day's hours; null for no limit. */
  readonly hours: number | null;
  /** Share of a zone's work that dividing it must save to be recommended; `WORTH_DIVIDING` when left out. */
  readonly worthDividing?: number;
}

const DEFAULT_LIMITS: PracticalLimits = { visitsPerZone: 60, hours: null };

interface Outcome {
  readonly visits: number;
  readonly hours: number;
  /** Share of the vines visited that the option saves. */
  readonly saving: number;
  /** True when the option brings the plan inside the limits. */
  readonly fits: boolean;
}

export type ImpracticalOption =
  | (Outcome & { readonly kind: 'widerMargin'; readonly scale: number; readonly margins: readonly { readonly code: string; readonly margin: Margin }[] })
  | (Outcome & { readonly kind: 'lowerConfidence'; readonly confidence: number })
  | (Outcome & { readonly kind: 'poolZones'; readonly zones: readonly [string, string] })
  | (Outcome & { readonly kind: 'divideZone'; readonly zone: string; readonly division: Division; readonly recommended: boolean; /** Layer that the cut follows, as people call it. */ readonly layerName: string });

export interface ImpracticalAdvice {
  readonly zonesOver: readonly string[];
  readonly hoursOver: boolean;
  readonly options: readonly ImpracticalOption[];
}

export interface AdviceQuestion {
  readonly question: PlanQuestion;
  readonly plan: PlanCounts;
  readonly limits?: PracticalLimits;
  /** Confidence levels to fall back on, any order. */
  readonly confidences: readonly number[];
  /** The question with two zones sampled as one; pooling is not looked into when left out. */
  readonly pooled?: (one: string, other: string) => PlanQuestion;
  /** Best division of zones for which one could be sought (`bestDivision`, on the zone's driving measure). */
  readonly divisions?: readonly { readonly zone: string; readonly division: Division; readonly layerName?: string }[];
}

/** Null when the plan is within its limits. */
export function adviseImpractical(ask: AdviceQuestion): ImpracticalAdvice | null {
  const { question, plan, limits = DEFAULT_LIMITS } = ask;
  const zonesOver = plan.zones.filter((zone) => zone.visits > limits.visitsPerZone).map(({ zone }) => zone);
  const hoursOver = limits.hours !== null && plan.hours > limits.hours;
  if (zonesOver.length === 0 && !hoursOver) return null;
  const judge = (other: PlanCounts): Outcome => ({ visits: other.visits, hours: other.hours, saving: 1 - other.visits / plan.visits, fits: isPractical(other, limits) });
  const options = [widerMargin(question, limits, judge), lowerConfidence(ask, judge), poolZones(ask, zonesOver, judge), ...divided(ask, zonesOver)];
  return { zonesOver, hoursOver, options: options.filter((option) => option !== null && helps(option, plan)) as ImpracticalOption[] };
}

/** A division is spoken of either way, since people ask for it; the rest only where it brings the plan inside its limits or saves a hundredth. */
function helps({ kind, fits, visits, hours }: ImpracticalOption, plan: PlanCounts): boolean {
  return kind === 'divideZone' || fits || visits <= 0.99 * plan.visits || hours <= 0.99 * plan.hours;
}

function isPractical(plan: PlanCounts, limits: PracticalLimits): boolean {
  return plan.zones.every((zone) => zone.visits <= limits.visitsPerZone) && (limits.hours === null || plan.hours <= limits.hours);
}

type Judge = (plan: PlanCounts) => Outcome;

function widerMargin(question: PlanQuestion, limits: PracticalLimits, judge: Judge): ImpracticalOption | null {
  const found = smallestScale(question, (plan) => isPractical(plan, limits));
  if (found === null) return null;
  const margins = question.measures.map(({ code, margin }) => ({ code, margin: { ...margin, value: margin.value * found.scale } }));
  return { kind: 'widerMargin', scale: found.scale, margins, ...judge(found.plan) };
}

/** The highest lower level that fits; when none does, the lowest. */
function lowerConfidence({ question, confidences }: AdviceQuestion, judge: Judge): ImpracticalOption | null {
  const highest = Math.max(...question.measures.map(({ confidence }) => confidence));
  const lower = [...confidences].filter((level) => level < highest).sort((a, b) => b - a);
  let option: ImpracticalOption | null = null;
  for (const level of lower) {
    const measures = question.measures.map((measure) => ({ ...measure, confidence: Math.min(measure.confidence, level) }));
    option = { kind: 'lowerConfidence', confidence: level, ...judge(planCounts({ ...question, measures })) };
    if (option.fits) break;
  }
  return option;
}

/** The pair with a zone over its limit whose union needs the fewest vines; of as many vines, the one that takes less time. */
function poolZones({ question, pooled }: AdviceQuestion, zonesOver: readonly string[], judge: Judge): ImpracticalOption | null {
  let best: ImpracticalOption | null = null;
  question.zones.forEach((first, i) => {
    question.zones.slice(i + 1).forEach((second) => {
      if (!pooled || (zonesOver.length > 0 && !zonesOver.includes(first.zone) && !zonesOver.includes(second.zone))) return;
      const outcome = judge(planCounts(pooled(first.zone, second.zone)));
      if (best === null || outcome.visits < best.visits || (outcome.visits === best.visits && outcome.hours < best.hours)) best = { kind: 'poolZones', zones: [first.zone, second.zone], ...outcome };
    });
  });
  return best;
}

function divided({ plan, divisions = [], limits = DEFAULT_LIMITS }: AdviceQuestion, zonesOver: readonly string[]): ImpracticalOption[] {
  return divisions
    .filter(({ zone }) => zonesOver.includes(zone))
    .map(({ zone, division, layerName = '' }) => {
      const present = plan.zones.find((candidate) => candidate.zone === zone)!;
      const visits = plan.visits - present.visits + division.total;
      const hours = plan.hours - present.hours * (1 - division.total / present.visits);
      const othersFit = plan.zones.every((other) => other.zone === zone || other.visits <= limits.visitsPerZone);
      const fits = othersFit && Math.max(...division.counts) <= limits.visitsPerZone && (limits.hours === null || hours <= limits.hours);
      return { kind: 'divideZone', zone, division, layerName, recommended: division.saving >= (limits.worthDividing ?? WORTH_DIVIDING), visits, hours, saving: 1 - visits / plan.visits, fits };
    });
}
