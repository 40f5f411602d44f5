import { AnalysisError } from '../analysis/analysisError.ts';
import { wordForChange, type ChangeWord } from '../sampling/change.ts';
import { checkConfidence } from '../sampling/margins.ts';
import { criticalT } from '../sampling/quantiles.ts';

/**
 * Straight line through the means of the last visits (ordinary least squares on day). Ripening flattens, so old
 * visits are left out; with fewer than three there is no line, only two points.
 * Source: any text on regression, e.g. Snedecor & Cochran, Statistical Methods, ch. 9. Checked against R (lm).
 */
export interface VisitPoint {
  /** Any day count with a common start (day of year, days since a date). */
  readonly day: number;
  readonly value: number;
  /** How the sample was taken; visits with different protocols are not put on one line. */
  readonly protocol?: string;
}

export interface Trend {
  readonly kind: 'trend';
  readonly visits: number;
  readonly firstDay: number;
  readonly lastDay: number;
  readonly intercept: number;
  /** Change per day. */
  readonly slope: number;
  readonly slopeStandardError: number;
  readonly slopeLower: number;
  readonly slopeUpper: number;
  /** Rising, falling, or not to be told from level. */
  readonly word: ChangeWord;
  readonly df: number;
  /** Scatter of visit means around the line. */
  readonly residualSd: number;
  readonly rSquared: number;
  readonly meanDay: number;
  readonly meanValue: number;
  /** Σ(day − mean day)². */
  readonly daySpread: number;
  readonly confidence: number;
}

export interface TrendRefused {
  readonly kind: 'refused';
  readonly reason: 'fewVisits' | 'oneDay' | 'mixedProtocols';
  readonly visits: number;
  readonly needed: number;
}

export interface TrendOptions {
  readonly confidence: number;
  /** How many of the latest visits to use; 3 to 5 is usual. */
  readonly lastVisits?: number;
  /** Step of the instrument: three rounded values on one line are not an exact line. */
  readonly resolution?: number;
}

export const VISITS_NEEDED = 3;
const LAST_VISITS = 5;

/** Example: days 0 7 14 21 26, °Brix 18.2 19.6 21.1 22.3 23.5 → slope 0.201235 a day, 0.186707 to 0.215763 at 95 %. */
export function fitTrend(points: readonly VisitPoint[], { confidence, lastVisits = LAST_VISITS, resolution = 0 }: TrendOptions): Trend | TrendRefused {
  checkConfidence(confidence);
  if (lastVisits < VISITS_NEEDED) throw new AnalysisError('too_few_visits', `A trend uses at least ${VISITS_NEEDED} visits; ${lastVisits} were allowed.`);
  const used = [...points].sort((a, b) => a.day - b.day).slice(-lastVisits);
  const refuse = (reason: TrendRefused['reason']): TrendRefused => ({ kind: 'refused', reason, visits: used.length, needed: VISITS_NEEDED });
  if (used.length < VISITS_NEEDED) return refuse('fewVisits');
  if (new Set(used.map(({ day }) => day)).size < VISITS_NEEDED) return refuse('oneDay');
  if (new Set(used.map(({ protocol }) => protocol ?? '')).size > 1) return refuse('mixedProtocols');
  return leastSquares(used, confidence, resolution / Math.sqrt(12));
}

function leastSquares(points: readonly VisitPoint[], confidence: number, leastSd: number): Trend {
  const n = points.length;
  const meanDay = points.reduce((sum, { day }) => sum + day, 0) / n;
  const meanValue = points.reduce((sum, { value }) => sum + value, 0) / n;
  let daySpread = 0;
  let products = 0;
  let total = 0;
  for (const { day, value } of points) {
    daySpread += (day - meanDay) ** 2;
    products += (day - meanDay) * (value - meanValue);
    total += (value - meanValue) ** 2;
  }
  const slope = products / daySpread;
  const residual = points.reduce((sum, { day, value }) => sum + (value - meanValue - slope * (day - meanDay)) ** 2, 0);
  const df = n - 2;
  const residualSd = Math.max(leastSd, Math.sqrt(residual / df));
  const slopeStandardError = residualSd / Math.sqrt(daySpread);
  const reach = criticalT(confidence, df) * slopeStandardError;
  const limits = { lower: slope - reach, upper: slope + reach };
  return {
    kind: 'trend',
    visits: n,
    firstDay: points[0]!.day,
    lastDay: points[n - 1]!.day,
    intercept: meanValue - slope * meanDay,
    slope,
    slopeStandardError,
    slopeLower: limits.lower,
    slopeUpper: limits.upper,
    word: wordForChange(limits),
    df,
    residualSd,
    rSquared: total === 0 ? Number.NaN : 1 - residual / total,
    meanDay,
    meanValue,
    daySpread,
    confidence,
  };
}
