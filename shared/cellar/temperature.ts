/**
 * Refractometers are defined at 20 °C. Instruments that compensate must not be corrected again, so the first answer
 * is a question. The band (0.06 to 0.09 °Brix a degree, growing with sugar) is from memory of OIV-MA-AS2-02; it is
 * given as a range and should give way to that table.
 */
export type RefractometerAnswer =
  | { readonly kind: 'asRead'; readonly brix: number }
  /** Nobody said whether the instrument compensates. */
  | { readonly kind: 'ask' }
  | { readonly kind: 'corrected'; readonly low: number; readonly middle: number; readonly high: number };

const LOW_PER_DEGREE = 0.06;
const HIGH_PER_DEGREE = 0.09;
const REFERENCE_C = 20;

export interface RefractometerReading {
  readonly brix: number;
  readonly temperatureC: number;
  /** Null when unknown. */
  readonly compensates: boolean | null;
}

/** Warm juice reads low: the correction is added above 20 °C and taken off below. */
export function correctRefractometer({ brix, temperatureC, compensates }: RefractometerReading): RefractometerAnswer {
  const degrees = temperatureC - REFERENCE_C;
  if (compensates === true || degrees === 0) return { kind: 'asRead', brix };
  if (compensates === null) return { kind: 'ask' };
  const ends = [brix + degrees * LOW_PER_DEGREE, brix + degrees * HIGH_PER_DEGREE];
  return { kind: 'corrected', low: Math.min(...ends), middle: (ends[0]! + ends[1]!) / 2, high: Math.max(...ends) };
}
