import { forecastDay } from './forecast.ts';
import { fitTrend, VISITS_NEEDED, type TrendOptions, type VisitPoint } from './trend.ts';

/**
 * Would the trend have been worth having? Each visit is forecast from those before it and compared with the simplest
 * rival, "as at the last visit".
 */
export interface BackTestStep {
  readonly day: number;
  readonly actual: number;
  readonly forecast: number;
  readonly noChange: number;
  /** Whether the band for a visit held. */
  readonly held: boolean;
}

export interface BackTest {
  readonly steps: readonly BackTestStep[];
  readonly n: number;
  /** Mean absolute errors; NaN without steps. */
  readonly trendError: number;
  readonly noChangeError: number;
  /** Share of bands that held. */
  readonly heldShare: number;
  /** Null when there is nothing to compare. */
  readonly beatsNoChange: boolean | null;
  /** True below five steps: too few to judge. */
  readonly few: boolean;
}

const ENOUGH_STEPS = 5;

/** Visits of one series (one zone, one measure), any order. Visits that no trend could be fitted for are passed over. */
export function backTestSteps(points: readonly VisitPoint[], options: TrendOptions): BackTestStep[] {
  const sorted = [...points].sort((a, b) => a.day - b.day);
  const steps: BackTestStep[] = [];
  for (let i = VISITS_NEEDED; i < sorted.length; i++) {
    const trend = fitTrend(sorted.slice(0, i), options);
    const { day, value: actual } = sorted[i]!;
    if (trend.kind !== 'trend' || day <= trend.lastDay) continue;
    const { value: forecast, visit } = forecastDay(trend, day);
    steps.push({ day, actual, forecast, noChange: sorted[i - 1]!.value, held: actual >= visit.lower && actual <= visit.upper });
  }
  return steps;
}

/** Summary over the steps of one or many series. */
export function judgeBackTest(steps: readonly BackTestStep[]): BackTest {
  const n = steps.length;
  const mean = (values: readonly number[]) => (n === 0 ? Number.NaN : values.reduce((sum, value) => sum + value, 0) / n);
  const trendError = mean(steps.map((step) => Math.abs(step.actual - step.forecast)));
  const noChangeError = mean(steps.map((step) => Math.abs(step.actual - step.noChange)));
  return {
    steps,
    n,
    trendError,
    noChangeError,
    heldShare: mean(steps.map((step) => (step.held ? 1 : 0))),
    beatsNoChange: n === 0 ? null : trendError < noChangeError,
    few: n < ENOUGH_STEPS,
  };
}
