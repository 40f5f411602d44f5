import { AnalysisError } from '../analysis/analysisError.ts';
import { planCounts, type PlanCounts } from './planCounts.ts';
import type { PlanQuestion } from './planQuestion.ts';

/**
 * The plan turned round: what can be known with this time, money or number of vines. All margins are widened or
 * tightened by one factor, in the proportions the manager asked for, until the plan just fits. Because the counts
 * come from the same function as the plan, both directions agree.
 */
export interface Budget {
  readonly kind: 'hours' | 'vines' | 'money';
  readonly value: number;
}

export type BudgetAnswer =
  | {
      readonly kind: 'plan';
      /** Factor on every margin asked for: 1.4 means 40 % wider. */
      readonly scale: number;
      readonly plan: PlanCounts;
      /** True when every eligible vine fits in the budget. */
      readonly everyVine: boolean;
    }
  | { readonly kind: 'tooSmall'; /** What the plan costs at the zones' minimum, in the kind of the budget. */ readonly least: number };

export function spent(plan: PlanCounts, kind: Budget['kind']): number {
  if (kind === 'hours') return plan.hours;
  return kind === 'vines' ? plan.visits : plan.money;
}

export function planForBudget(question: PlanQuestion, budget: Budget): BudgetAnswer {
  if (!(budget.value > 0)) throw new AnalysisError('bad_budget', `The budget must be above 0; got ${budget.value}.`);
  const found = smallestScale(question, (plan) => spent(plan, budget.kind) <= budget.value * (1 + 1e-12));
  if (found === null) return { kind: 'tooSmall', least: spent(planCounts(scaleMargins(question, LARGEST)), budget.kind) };
  return { kind: 'plan', ...found };
}

/** Margins tighter than this ask for every vine. */
const SMALLEST = 4 ** -10;
const LARGEST = 1e6;
/** Two factors this near are one. */
const NEAR = 1 + 1e-5;

export interface ScaledPlan {
  readonly scale: number;
  readonly plan: PlanCounts;
  /** True when the plan holds every eligible vine: tighter margins would not be kept. */
  readonly everyVine: boolean;
}

/**
 * Smallest factor on all margins whose plan fits, to 1e-5; null when even the minimum does not. Counts only fall as
 * margins widen. Where every vine fits, the widest margins that still ask for all of them, so that no margin is promised
 * that nobody asked for; margins stay as they are where they ask for every vine already.
 */
export function smallestScale(question: PlanQuestion, fits: (plan: PlanCounts) => boolean): ScaledPlan | null {
  const planAt = (scale: number) => planCounts(scaleMargins(question, scale));
  const all = planAt(SMALLEST);
  const isAll = (plan: PlanCounts) => plan.visits === all.visits && plan.measures.every(({ samples }, j) => samples === all.measures[j]!.samples);
  if (fits(all)) {
    const wanted = planAt(1);
    if (isAll(wanted)) return { scale: 1, plan: wanted, everyVine: true };
    const { low } = narrowed(SMALLEST, 1, (scale) => !isAll(planAt(scale)));
    return { scale: low, plan: planAt(low), everyVine: true };
  }
  let high = 1;
  while (!fits(planAt(high))) {
    high *= 4;
    if (high > LARGEST) return null;
  }
  const { high: scale } = narrowed(SMALLEST, high, (at) => fits(planAt(at)));
  return { scale, plan: planAt(scale), everyVine: false };
}

/** The place between a factor that does not hold and one that does. */
function narrowed(from: number, to: number, holds: (scale: number) => boolean): { readonly low: number; readonly high: number } {
  let [low, high] = [from, to];
  while (high / low > NEAR) {
    const middle = Math.sqrt(high * low);
    if (holds(middle)) high = middle;
    else low = middle;
  }
  return { low, high };
}

export function scaleMargins(question: PlanQuestion, scale: number): PlanQuestion {
  return { ...question, measures: question.measures.map((measure) => ({ ...measure, margin: { ...measure.margin, value: measure.margin.value * scale } })) };
}
