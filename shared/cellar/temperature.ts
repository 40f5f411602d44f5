/**
 * Refractometers are defined at 20 °C. Instruments that compensate must not be corrected again, so the first answer
 * is a question. From 5 to 20 °C the correction is that of table I of OIV method OIV-MA-AS2-02. Above 20 °C the table was
 * not at hand: its rows from 10 to 17 °C are continued through 20 °C by a parabola (least squares, within 0.006 of every one
 * of these rows), with a range that widens with the square of the distance. The refractive index of water, continued the
 * same way, is 0.04 °Brix off at 30 °C.
 */
export type RefractometerAnswer =
  | { readonly kind: 'asRead'; readonly brix: number }
  /** Nobody said whether the instrument compensates. */
  | { readonly kind: 'ask' }
  | { readonly kind: 'corrected'; readonly low: number; readonly middle: number; readonly high: number };

const REFERENCE_C = 20;

/** °Brix a degree and a squared degree, for 10, 15, 20, 25 and 30 °Brix as read. */
const warmCurves = [[0.06916, 0.001019], [0.06975, 0.000754], [0.07158, 0.000667], [0.07266, 0.000544], [0.07523, 0.00061]];
/** By how much the continued curve may be off, besides the rounding of the table. */
const WARM_ERROR_PER_SQUARED_DEGREE = 0.0005;

/** What is taken off at 5, 10, 15 and 20 °C, for 10, 15, 20, 25 and 30 °Brix as read; between them a straight line is within 0.03 of the table (0.01 from 15 °Brix on). */
const coldStepC = 5;
const brixStep = 5;
const coldTable = [[0.82, 0.87, 0.92, 0.95, 0.99], [0.59, 0.62, 0.65, 0.67, 0.69], [0.32, 0.33, 0.34, 0.35, 0.36], [0, 0, 0, 0, 0]];
/** Rounding of the table and the line between its rows. */
const TABLE_ERROR = 0.03;

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
  if (temperatureC >= coldStepC && degrees < 0) {
    const middle = brix - coldCorrection(brix, temperatureC);
    return { kind: 'corrected', low: middle - TABLE_ERROR, middle, high: middle + TABLE_ERROR };
  }
  const middle = brix + warmCorrection(brix, degrees);
  const error = TABLE_ERROR + WARM_ERROR_PER_SQUARED_DEGREE * degrees * degrees;
  return { kind: 'corrected', low: middle - error, middle, high: middle + error };
}

/** Straight lines between the curves around; beyond 10 and 30 °Brix the nearest one. Below 5 °C, where the table ends, it serves as well. */
function warmCorrection(brix: number, degrees: number): number {
  const column = Math.min(4, Math.max(0, brix / brixStep - 2));
  const left = Math.min(3, Math.floor(column));
  const at = (index: number) => warmCurves[index]![0]! * degrees + warmCurves[index]![1]! * degrees * degrees;
  return at(left) * (1 - (column - left)) + at(left + 1) * (column - left);
}

/** Straight lines between the four values around; beyond 10 and 30 °Brix the nearest column. */
function coldCorrection(brix: number, temperatureC: number): number {
  const [row, column] = [temperatureC / coldStepC - 1, Math.min(4, Math.max(0, brix / brixStep - 2))];
  const [top, left] = [Math.min(2, Math.floor(row)), Math.min(3, Math.floor(column))];
  const at = (down: number, right: number) => coldTable[top + down]![left + right]!;
  const [down, right] = [row - top, column - left];
  return (at(0, 0) * (1 - right) + at(0, 1) * right) * (1 - down) + (at(1, 0) * (1 - right) + at(1, 1) * right) * down;
}
