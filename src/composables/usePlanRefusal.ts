import { useI18n } from 'vue-i18n';
import type { AnalysisError } from '../../shared/analysis/analysisError.ts';

/** Why a plan has no answer, in the reader's language. What no choice on the screen can bring about keeps the calculation's own words. */
export function usePlanRefusal(): (refusal: AnalysisError) => string {
  const { t, te } = useI18n();
  return ({ code, message }) => {
    const key = `sampling.refusal.${code}`;
    return te(key) ? t(key) : message;
  };
}
