import { AnalysisError } from '../analysis/analysisError.ts';
import { planCounts } from './planCounts.ts';
import type { PlanQuestion } from './planQuestion.ts';

/** Counts and hours against the margin, one curve for each confidence, for one measure of a plan. */
export interface TradeOffPoint {
  readonly margin: number;
  readonly visits: number;
  readonly hours: number;
}

export interface TradeOffCurve {
  readonly confidence: number;
  readonly points: readonly TradeOffPoint[];
}

export interface TradeOffOptions {
  readonly confidences: readonly number[];
  /** On the scale of the measure's margin; `marginLadder` around the chosen margin when left out. */
  readonly margins?: readonly number[];
}

export function tradeOffCurves(question: PlanQuestion, code: string, { confidences, margins }: TradeOffOptions): TradeOffCurve[] {
  const measure = question.measures.find((candidate) => candidate.code === code);
  if (!measure) throw new AnalysisError('measure_missing', `The plan has no measure "${code}".`);
  const ladder = margins ?? marginLadder(measure.margin.value / 3, measure.margin.value * 3);
  return confidences.map((confidence) => ({
    confidence,
    points: ladder.map((margin) => {
      const plan = planCounts({ ...question, measures: [{ ...measure, confidence, margin: { ...measure.margin, value: margin } }] });
      return { margin, visits: plan.visits, hours: plan.hours };
    }),
  }));
}

/** Margins in equal ratios, both ends included. */
export function marginLadder(from: number, to: number, steps = 40): number[] {
  return Array.from({ length: steps }, (_, i) => from * (to / from) ** (i / (steps - 1)));
}
