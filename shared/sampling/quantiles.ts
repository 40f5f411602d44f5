import { chiSquareTails, studentTTails } from './distributions.ts';
import { lnGamma } from './specialFunctions.ts';

/**
 * Quantiles of the normal, Student's t and chi-square to 1e-10 relative or better.
 * Rounded table values (1.96, 2.26 …) change sample sizes by one, so they are never used.
 * Checked against R 4.2.2 (qnorm, qt, qchisq).
 */

/** Wichura 1988, Applied Statistics 37:477, algorithm AS 241 (PPND16): rational approximations for three regions. */
const CENTRE_ABOVE = [3.3871328727963665, 133.14166789178438, 1971.5909503065513, 13731.69376550946, 45921.95393154987, 67265.7709270087, 33430.57558358813, 2509.0809287301227];
const CENTRE_BELOW = [1, 42.31333070160091, 687.1870074920579, 5394.196021424751, 21213.794301586597, 39307.89580009271, 28729.085735721943, 5226.495278852854];
const MIDDLE_ABOVE = [1.4234371107496835, 4.630337846156546, 5.769497221460691, 3.6478483247632045, 1.2704582524523684, 0.2417807251774506, 0.022723844989269184, 0.0007745450142783414];
const MIDDLE_BELOW = [1, 2.053191626637759, 1.6763848301838038, 0.6897673349851, 0.14810397642748008, 0.015198666563616457, 0.0005475938084995345, 1.0507500716444169e-9];
const FAR_ABOVE = [6.657904643501103, 5.463784911164114, 1.7848265399172913, 0.29656057182850487, 0.026532189526576124, 0.0012426609473880784, 0.000027115555687434876, 2.0103343992922881e-7];
const FAR_BELOW = [1, 0.599832206555888, 0.1369298809227358, 0.014875361290850615, 0.0007868691311456133, 0.000018463183175100548, 1.421511758316446e-7, 2.0442631033899397e-15];

function polynomial(coefficients: readonly number[], x: number): number {
  let value = 0;
  for (let i = coefficients.length - 1; i >= 0; i--) value = value * x + coefficients[i]!;
  return value;
}

/** The value with probability `p` below it in the standard normal, 0 < p < 1. Example: normalQuantile(0.975) = 1.959964. */
export function normalQuantile(p: number): number {
  const fromMiddle = p - 0.5;
  if (Math.abs(fromMiddle) <= 0.425) {
    const r = 0.180625 - fromMiddle * fromMiddle;
    return (fromMiddle * polynomial(CENTRE_ABOVE, r)) / polynomial(CENTRE_BELOW, r);
  }
  const magnitude = normalUpperQuantile(fromMiddle < 0 ? p : 1 - p);
  return fromMiddle < 0 ? -magnitude : magnitude;
}

/** The value with probability `tail` above it; keeps its digits for tails far below 1e-16. */
export function normalUpperQuantile(tail: number): number {
  if (tail >= 0.075) return -normalQuantile(tail);
  const r = Math.sqrt(-Math.log(tail));
  return r <= 5
    ? polynomial(MIDDLE_ABOVE, r - 1.6) / polynomial(MIDDLE_BELOW, r - 1.6)
    : polynomial(FAR_ABOVE, r - 5) / polynomial(FAR_BELOW, r - 5);
}

/** Two-sided normal factor for a confidence such as 0.95. */
export function criticalZ(confidence: number): number {
  return normalUpperQuantile((1 - confidence) / 2);
}

/** Two-sided t factor for a confidence such as 0.95; df need not be whole, Infinity gives the normal. */
export function criticalT(confidence: number, df: number): number {
  if (!Number.isInteger(df) || df < 1 || df > REMEMBERED_DF) return studentTUpperQuantile((1 - confidence) / 2, df);
  let row = remembered.get(confidence);
  if (!row) {
    row = new Float64Array(REMEMBERED_DF + 1);
    if (remembered.size < REMEMBERED_LEVELS) remembered.set(confidence, row);
  }
  if (row[df] === 0) row[df] = studentTUpperQuantile((1 - confidence) / 2, df);
  return row[df]!;
}

/** Searches and running checks ask for the same few factors thousands of times; each is worked out once. */
const REMEMBERED_DF = 4000;
const REMEMBERED_LEVELS = 16;
const remembered = new Map<number, Float64Array>();

/** Above this the expansion around the normal is exact to 1e-12. */
const NEARLY_NORMAL_DF = 1e5;

/** The value with probability `tail` above it in Student's t. Newton on the logarithm of the tail, kept inside a bracket. */
export function studentTUpperQuantile(tail: number, df: number): number {
  if (tail > 0.5) return -studentTUpperQuantile(1 - tail, df);
  if (tail === 0.5) return 0;
  if (df === 1) return 1 / Math.tan(Math.PI * tail);
  if (df === 2) return (1 - 2 * tail) / Math.sqrt(2 * tail * (1 - tail));
  if (df >= NEARLY_NORMAL_DF) return cornishFisherT(normalUpperQuantile(tail), df);
  const density = (t: number) => Math.exp(lnTConstant(df) - ((df + 1) / 2) * Math.log1p((t * t) / df));
  return refine({ start: startT(tail, df), wanted: tail, tail: (t) => studentTTails(t, df).upper, density });
}

function lnTConstant(df: number): number {
  return lnGamma((df + 1) / 2) - lnGamma(df / 2) - 0.5 * Math.log(df * Math.PI);
}

/** Expansion of t around z in powers of 1/df (Abramowitz & Stegun 1964, 26.7.5). */
function cornishFisherT(z: number, df: number): number {
  const z2 = z * z;
  const first = (z * (z2 + 1)) / 4;
  const second = (z * ((5 * z2 + 16) * z2 + 3)) / 96;
  const third = (z * (((3 * z2 + 19) * z2 + 17) * z2 - 15)) / 384;
  return z + (first + (second + third / df) / df) / df;
}

/** Near the middle the expansion around z; far out, or with few df, the leading power of the tail. */
function startT(tail: number, df: number): number {
  const z = normalUpperQuantile(tail);
  if (df > 3 && z * z < df) return cornishFisherT(z, df);
  const lnConstant = lnTConstant(df) + ((df - 1) / 2) * Math.log(df);
  return Math.exp((lnConstant - Math.log(tail)) / df);
}

/** The value with probability `p` below it in chi-square with `df` degrees of freedom. */
export function chiSquareQuantile(p: number, df: number): number {
  const z = normalQuantile(p);
  const third = 2 / (9 * df);
  const wilsonHilferty = df * (1 - third + z * Math.sqrt(third)) ** 3;
  const smallValue = 2 * Math.exp((Math.log(p * (df / 2)) + lnGamma(df / 2)) * (2 / df));
  const start = wilsonHilferty > 0.2 * df ? wilsonHilferty : smallValue;
  const density = (x: number) => Math.exp((df / 2 - 1) * Math.log(x / 2) - x / 2 - lnGamma(df / 2)) / 2;
  if (p <= 0.5) return refine({ start, wanted: p, tail: (x) => chiSquareTails(x, df).lower, density, rising: true });
  return refine({ start, wanted: 1 - p, tail: (x) => chiSquareTails(x, df).upper, density });
}

interface Refinement {
  readonly start: number;
  readonly wanted: number;
  readonly tail: (x: number) => number;
  readonly density: (x: number) => number;
  /** Whether `tail` grows with x (a lower tail) or falls (an upper tail). */
  readonly rising?: boolean;
}

/** Positive root of tail(x) = wanted: Newton in ln(tail), halving the bracket whenever a step leaves it. */
function refine({ start, wanted, tail, density, rising = false }: Refinement): number {
  let low = 0;
  let high = Infinity;
  let x = start > 0 && Number.isFinite(start) ? start : 1;
  for (let step = 0; step < 200; step++) {
    const value = tail(x);
    const tooFar = rising ? value > wanted : value < wanted;
    if (tooFar) high = x;
    else low = x;
    const slope = (rising ? density(x) : -density(x)) / value;
    let next = x - Math.log(value / wanted) / slope;
    // Newton doubles the digits with each step: after a step of 1e-9 the rest is rounding.
    if (Math.abs(next - x) <= 1e-9 * x) return next;
    if (!(next > low && next < high)) next = high === Infinity ? 2 * x : (low + high) / 2;
    x = next;
  }
  return x;
}
