import { computed, type ComputedRef, type Ref } from 'vue';
import { AnalysisError } from '../../shared/analysis/analysisError.ts';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import type { PlanChoices } from '../../shared/contracts/planChoices.ts';
import type { ZoneDivision } from '../../shared/contracts/plans.ts';
import { answerBudget, answerPlan, answerTradeOff, type PlanAnswer } from '../../shared/sampling/plan.ts';
import type { Budget, BudgetAnswer } from '../../shared/sampling/budget.ts';
import type { TradeOffCurve } from '../../shared/sampling/tradeOff.ts';

export interface LivePlan {
  answer: ComputedRef<PlanAnswer | null>;
  /** Why there is no answer. */
  refusal: ComputedRef<AnalysisError | null>;
  curves: (code: string) => TradeOffCurve[];
  forBudget: (budget: Budget) => BudgetAnswer | null;
}

/** The plan's answer while somebody moves a margin: the same calculation as the server's, in the browser. */
export function usePlanAnswer(basis: Ref<PlanBasis | null>, choices: Ref<PlanChoices>, divisions: Ref<readonly ZoneDivision[]>): LivePlan {
  const outcome = computed(() => {
    if (basis.value === null || choices.value.measures.length === 0) return { answer: null, refusal: null };
    return attempt(() => answerPlan(basis.value!, choices.value, divisions.value));
  });
  return {
    answer: computed(() => outcome.value.answer),
    refusal: computed(() => outcome.value.refusal),
    curves: (code) => (basis.value === null ? [] : (attempt(() => answerTradeOff(basis.value!, choices.value, code)).answer ?? [])),
    forBudget: (budget) => (basis.value === null || choices.value.measures.length === 0 ? null : attempt(() => answerBudget(basis.value!, choices.value, budget)).answer),
  };
}

function attempt<Answer>(work: () => Answer): { answer: Answer | null; refusal: AnalysisError | null } {
  try {
    return { answer: work(), refusal: null };
  } catch (error) {
    if (!(error instanceof AnalysisError)) throw error;
    return { answer: null, refusal: error };
  }
}
