/**
 * Forecasts against what came: bias, size of the error, and how often the interval held. With few cases the share says
 * little, and that is part of the answer.
 */
export interface ForecastRecord {
  readonly forecast: number;
  readonly lower: number;
  readonly upper: number;
  readonly actual: number;
}

export interface ForecastReview {
  readonly n: number;
  /** Mean of actual − forecast; positive when more came than was forecast. NaN without cases. */
  readonly bias: number;
  readonly meanAbsoluteError: number;
  /** Mean of |actual − forecast| / actual, over cases with an actual above 0. */
  readonly meanRelativeError: number;
  readonly held: number;
  readonly few: boolean;
}

const ENOUGH = 10;

export function reviewForecasts(records: readonly ForecastRecord[]): ForecastReview {
  const mean = (values: readonly number[]) => (values.length === 0 ? Number.NaN : values.reduce((sum, value) => sum + value, 0) / values.length);
  const n = records.length;
  return {
    n,
    bias: mean(records.map(({ actual, forecast }) => actual - forecast)),
    meanAbsoluteError: mean(records.map(({ actual, forecast }) => Math.abs(actual - forecast))),
    meanRelativeError: mean(records.filter(({ actual }) => actual > 0).map(({ actual, forecast }) => Math.abs(actual - forecast) / actual)),
    held: records.filter(({ actual, lower, upper }) => actual >= lower && actual <= upper).length,
    few: n < ENOUGH,
  };
}
