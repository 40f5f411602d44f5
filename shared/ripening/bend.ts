import { studentTTails } from '../sampling/distributions.ts';
import type { VisitPoint } from './trend.ts';

/**
 * Is ripening slowing down? A straight line through the last visits then runs ahead of the fruit: dates come too early
 * and bands hold less often than they say. Parabola by least squares over all visits, t test on its square term
 * (standard polynomial regression; checked against R). Few visits seldom show a bend that is there.
 */
export interface Bend {
  readonly kind: 'bend';
  readonly word: 'slowing' | 'quickening' | 'notDistinguishable';
  /** Change of the daily rate per day. */
  readonly rateChangePerDay: number;
  /** Two-sided p-value of no bend. */
  readonly p: number;
  readonly visits: number;
}

export interface BendRefused {
  readonly kind: 'refused';
  readonly reason: 'fewVisits';
  readonly visits: number;
  readonly needed: number;
}

const VISITS_FOR_BEND = 5;

export function findBend(points: readonly VisitPoint[], confidence: number): Bend | BendRefused {
  const n = points.length;
  if (new Set(points.map(({ day }) => day)).size < VISITS_FOR_BEND) return { kind: 'refused', reason: 'fewVisits', visits: n, needed: VISITS_FOR_BEND };
  const { square, slopeAtMiddle, squareError } = parabola(points);
  const p = squareError > 0 ? 2 * studentTTails(Math.abs(square / squareError), n - 3).upper : square === 0 ? 1 : 0;
  const clear = p < 1 - confidence;
  const word = !clear ? 'notDistinguishable' : square * slopeAtMiddle < 0 ? 'slowing' : 'quickening';
  return { kind: 'bend', word, rateChangePerDay: 2 * square, p, visits: n };
}

/** Least squares on polynomials orthogonal over the days, so that each coefficient stands alone. */
function parabola(points: readonly VisitPoint[]): { square: number; slopeAtMiddle: number; squareError: number } {
  const n = points.length;
  const sum = (term: (point: VisitPoint) => number) => points.reduce((total, point) => total + term(point), 0);
  const meanDay = sum(({ day }) => day) / n;
  const meanValue = sum(({ value }) => value) / n;
  const linear = (day: number) => day - meanDay;
  const s2 = sum(({ day }) => linear(day) ** 2);
  const s3 = sum(({ day }) => linear(day) ** 3);
  const quadratic = (day: number) => linear(day) ** 2 - (s3 / s2) * linear(day) - s2 / n;
  const slope = sum(({ day, value }) => linear(day) * value) / s2;
  const quadraticSpread = sum(({ day }) => quadratic(day) ** 2);
  const square = sum(({ day, value }) => quadratic(day) * value) / quadraticSpread;
  const residual = sum(({ day, value }) => (value - meanValue - slope * linear(day) - square * quadratic(day)) ** 2);
  return { square, slopeAtMiddle: slope - (square * s3) / s2, squareError: Math.sqrt(residual / (n - 3) / quadraticSpread) };
}
