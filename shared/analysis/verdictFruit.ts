/**
 * The verdict after the fruit has been looked at. Readings may take "several" back to "worth testing"; they never make zones
 * of a block that the layers call one, and never choose the number.
 */

import type { Random } from './random.ts';
import { reason, type VerdictReason, type VerdictResult } from './verdict.ts';
import { testOnReadings, type ReadingsTest, type ZoneReading } from './verdictReadings.ts';

export interface MeasureReadings {
  readonly measure: string;
  readonly readings: readonly ZoneReading[];
}

export interface FruitCheck {
  readonly state: 'untested' | 'inOneZone' | 'few' | 'agrees' | 'unclear' | 'disagrees';
  readonly tests: readonly (ReadingsTest & { readonly measure: string })[];
}

/** Fewer readings than this say nothing for or against a map of zones. */
export const LEAST_READINGS = 30;
export const AGREES_BELOW = 0.05;
const DISAGREES_ABOVE = 0.1;

/** Several measures are one look each: the best of them must hold after division by their number (Bonferroni). */
export function checkOnFruit(measures: readonly MeasureReadings[], random: Random): FruitCheck {
  const tests = measures
    .filter(({ readings }) => new Set(readings.map(({ zone }) => zone)).size > 1)
    .map(({ measure, readings }) => ({ measure, ...testOnReadings(readings, random) }));
  if (tests.length === 0) return { state: measures.some(({ readings }) => readings.length > 0) ? 'inOneZone' : 'untested', tests };
  const enough = tests.filter(({ n }) => n >= LEAST_READINGS);
  if (enough.length === 0) return { state: 'few', tests };
  const p = Math.min(1, Math.min(...enough.map((test) => test.p)) * enough.length);
  return { state: p <= AGREES_BELOW ? 'agrees' : p > DISAGREES_ABOVE ? 'disagrees' : 'unclear', tests };
}

/** Adds what the fruit says to the reasons, for each measure with readings enough, and takes "several" back when it disagrees. */
export function withFruit(result: VerdictResult, { state, tests }: FruitCheck): VerdictResult {
  const codes = { untested: 'not-tested-on-fruit', inOneZone: 'readings-in-one-zone', few: 'few-readings', agrees: 'fruit-agrees', unclear: 'fruit-unclear', disagrees: 'fruit-disagrees' } as const;
  const asked = state === 'few' ? tests : tests.filter(({ n }) => n >= LEAST_READINGS);
  // Where one measure agrees the others need not: a picker must know whether it is the sugar.
  const codeOf = ({ p }: ReadingsTest) => (state === 'agrees' && p * asked.length > AGREES_BELOW ? 'fruit-silent' : codes[state]);
  const added: VerdictReason[] =
    tests.length === 0
      ? [reason(codes[state], null, {})]
      : asked.map((test) => reason(codeOf(test), test.measure, { n: test.n, rSquared: test.leaveOneOutRSquared, p: test.p, limit: state === 'few' ? LEAST_READINGS : AGREES_BELOW }));
  const verdict = state === 'disagrees' && result.verdict === 'several' ? 'test' : result.verdict;
  return { ...result, verdict, reasons: [...result.reasons, ...added] };
}
