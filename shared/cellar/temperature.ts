/**
 * Refractometers are defined at 20 °C. Instruments that compensate must not be corrected again, so the first answer
 * is a question. What is not compensated is corrected by published rows only: below 20 °C those of table I of OIV method
 * OIV-MA-AS2-02, above it those of ICUMSA SPS-3 (1998), which agrees with the OIV's from 15 to 19 °C to 0.01. Rows from
 * 5 to 25 °C were at hand, and the method itself wants the juice at 20 ± 5 °C; outside them nothing is corrected.
 */
export type RefractometerAnswer =
  | { readonly kind: 'asRead'; readonly brix: number }
  /** Nobody said whether the instrument compensates. */
  | { readonly kind: 'ask' }
  | { readonly kind: 'corrected'; readonly low: number; readonly middle: number; readonly high: number }
  /** Colder or warmer than the published rows. */
  | { readonly kind: 'beyond'; readonly fromC: number; readonly toC: number };

const REFERENCE_C = 20;

/** What is added at each temperature (°C), for 10, 15, 20, 25 and 30 °Brix as read; between them a straight line is within 0.03 of the rows (0.01 from 15 °C on). */
const rows: readonly (readonly [temperatureC: number, added: readonly number[]])[] = [
  [5, [-0.82, -0.87, -0.92, -0.95, -0.99]], [10, [-0.59, -0.62, -0.65, -0.67, -0.69]], [15, [-0.32, -0.33, -0.34, -0.35, -0.36]], [20, [0, 0, 0, 0, 0]],
  [21, [0.07, 0.07, 0.07, 0.07, 0.08]], [22, [0.14, 0.14, 0.15, 0.15, 0.15]], [23, [0.21, 0.22, 0.22, 0.23, 0.23]], [24, [0.29, 0.29, 0.3, 0.3, 0.31]], [25, [0.36, 0.37, 0.38, 0.38, 0.39]],
];
const [fromC, toC] = [rows[0]![0], rows.at(-1)![0]];
const brixStep = 5;
/** Rounding of the rows and the line between them. */
const TABLE_ERROR = 0.03;

export interface RefractometerReading {
  readonly brix: number;
  readonly temperatureC: number;
  /** Null when unknown. */
  readonly compensates: boolean | null;
}

/** Warm juice reads low: the correction is added above 20 °C and taken off below; `middle` in °Brix at 20 °C, with its range. */
export function correctRefractometer({ brix, temperatureC, compensates }: RefractometerReading): RefractometerAnswer {
  if (compensates === true || temperatureC === REFERENCE_C) return { kind: 'asRead', brix };
  if (compensates === null) return { kind: 'ask' };
  if (temperatureC < fromC || temperatureC > toC) return { kind: 'beyond', fromC, toC };
  const middle = brix + added(brix, temperatureC);
  return { kind: 'corrected', low: middle - TABLE_ERROR, middle, high: middle + TABLE_ERROR };
}

/** Straight lines between the four values around; beyond 10 and 30 °Brix the nearest column. */
function added(brix: number, temperatureC: number): number {
  const top = Math.min(rows.length - 2, rows.findLastIndex(([at]) => at <= temperatureC));
  const [[above, first], [below, second]] = [rows[top]!, rows[top + 1]!];
  const column = Math.min(4, Math.max(0, brix / brixStep - 2));
  const left = Math.min(3, Math.floor(column));
  const along = (values: readonly number[]) => values[left]! * (left + 1 - column) + values[left + 1]! * (column - left);
  const down = (temperatureC - above) / (below - above);
  return along(first) * (1 - down) + along(second) * down;
}
