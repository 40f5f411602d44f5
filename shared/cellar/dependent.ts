import { normalTails } from '../sampling/distributions.ts';
import type { Estimate } from '../sampling/precision.ts';
import { normalQuantile } from '../sampling/quantiles.ts';

/**
 * Estimates that err together. Zones of one variety rest on the same growth factor and the same losses: if the factor is
 * wrong it is wrong for all of them, so its errors add up straight while everything a zone has to itself adds in squares
 * (law of propagation with correlation, JCGM 100:2008 §5.2). Degrees of freedom follow Satterthwaite 1946.
 */
export interface ErrorTerm {
  readonly standardError: number;
  readonly df: number;
}

export interface Dependent extends Estimate {
  /** What it has to itself. */
  readonly own: ErrorTerm;
  /** By the name of what it shares: estimates that name the same one err by it in step. */
  readonly shared: Readonly<Record<string, ErrorTerm>>;
}

export function dependent(value: number, own: readonly ErrorTerm[], shared: Readonly<Record<string, ErrorTerm>>): Dependent {
  const all = sumOfSquares([...own, ...Object.values(shared)]);
  return { value, ...all, own: sumOfSquares(own), shared };
}

/** As it is, or with all its error its own. */
export function asDependent(estimate: Estimate | Dependent): Dependent {
  return 'own' in estimate ? estimate : dependent(estimate.value, [estimate], {});
}

/** Σ factor·estimate. Example: two zones of 10 t, each ± 1 own and ± 1 by one growth factor → 20 t, se √(1 + 1 + 2²) = 2.449. */
export function combineDependent(terms: readonly { readonly factor: number; readonly estimate: Dependent }[]): Dependent {
  const shared = new Map<string, ErrorTerm>();
  for (const { factor, estimate } of terms) {
    for (const [key, { standardError, df }] of Object.entries(estimate.shared)) {
      const before = shared.get(key);
      shared.set(key, { standardError: (before?.standardError ?? 0) + factor * standardError, df: Math.min(before?.df ?? Infinity, df) });
    }
  }
  const own = terms.map(({ factor, estimate }) => ({ standardError: Math.abs(factor) * estimate.own.standardError, df: estimate.own.df }));
  return dependent(terms.reduce((sum, { factor, estimate }) => sum + factor * estimate.value, 0), own, Object.fromEntries([...shared].map(([key, { standardError, df }]) => [key, { standardError: Math.abs(standardError), df }])));
}

export function scaled(estimate: Dependent, factor: number): Dependent {
  return combineDependent([{ factor, estimate }]);
}

/** Times a factor that others are multiplied by as well; first-order error. */
export function timesShared(estimate: Dependent, factor: Estimate, key: string): Dependent {
  const grown = scaled(estimate, factor.value);
  return dependent(grown.value, [grown.own], { ...grown.shared, [key]: { standardError: Math.abs(estimate.value) * factor.standardError, df: factor.df } });
}

function sumOfSquares(terms: readonly ErrorTerm[]): ErrorTerm {
  let variance = 0;
  let satterthwaite = 0;
  for (const { standardError, df } of terms) {
    const part = standardError * standardError;
    variance += part;
    if (part > 0) satterthwaite += (part * part) / df;
  }
  return { standardError: Math.sqrt(variance), df: satterthwaite === 0 ? Infinity : (variance * variance) / satterthwaite };
}

/** A figure as screens have it: its width, and the standard errors it shares. */
export interface SharingFigure {
  readonly value: number;
  readonly standardError: number | null;
  readonly halfWidth: number | null;
  readonly shared?: Readonly<Record<string, number>> | undefined;
}

/** Σ factor·figure with its widths and what it shares in turn. Figures without a width count as exact. */
export function sumFigures(terms: readonly { readonly factor: number; readonly figure: SharingFigure }[]): SharingFigure & { readonly standardError: number; readonly halfWidth: number } {
  let [ownVariance, ownHalf] = [0, 0];
  const shared = new Map<string, { standardError: number; half: number }>();
  for (const { factor, figure } of terms) {
    if (!figure.standardError) continue;
    const perError = (figure.halfWidth ?? 0) / figure.standardError;
    let own = figure.standardError ** 2;
    for (const [key, standardError] of Object.entries(figure.shared ?? {})) {
      own -= standardError ** 2;
      const before = shared.get(key) ?? { standardError: 0, half: 0 };
      shared.set(key, { standardError: before.standardError + factor * standardError, half: before.half + factor * standardError * perError });
    }
    ownVariance += factor * factor * Math.max(0, own);
    ownHalf += (factor * perError) ** 2 * Math.max(0, own);
  }
  const all = [...shared.values()];
  return {
    value: terms.reduce((sum, { factor, figure }) => sum + factor * figure.value, 0),
    standardError: Math.sqrt(all.reduce((sum, { standardError }) => sum + standardError ** 2, ownVariance)),
    halfWidth: Math.sqrt(all.reduce((sum, { half }) => sum + half ** 2, ownHalf)),
    shared: Object.fromEntries([...shared].map(([key, { standardError }]) => [key, standardError])),
  };
}

export interface Load {
  readonly figure: SharingFigure;
  readonly limit: number;
}

const DRAWS = 2048;

/**
 * Chance that every load stays within its limit. Loads that share a factor are too large together, so chances may not
 * simply be multiplied. Given the shared factors the loads are independent and normal; over the factors the mean is
 * taken on a fixed lattice of points (additive recurrence with the plastic numbers, Roberts 2018), so that the same
 * loads always give the same chance, to about 0.005.
 */
export function chanceAllWithin(loads: readonly Load[]): number {
  const keys = [...new Set(loads.flatMap(({ figure }) => Object.keys(figure.shared ?? {})))];
  const steps = latticeSteps(keys.length);
  let sum = 0;
  for (let draw = 1; draw <= DRAWS; draw++) {
    const at = new Map(keys.map((key, i) => [key, normalQuantile(inside((0.5 + steps[i]! * draw) % 1))]));
    sum += loads.reduce((chance, load) => chance * chanceGiven(load, at), 1);
  }
  return sum / DRAWS;
}

function chanceGiven({ figure, limit }: Load, at: ReadonlyMap<string, number>): number {
  let [mean, variance] = [figure.value, (figure.standardError ?? 0) ** 2];
  for (const [key, standardError] of Object.entries(figure.shared ?? {})) {
    mean += standardError * at.get(key)!;
    variance -= standardError * standardError;
  }
  // Rounding must not make a width of what is exact.
  if (variance <= 1e-12 * (figure.standardError ?? 0) ** 2) return mean <= limit ? 1 : 0;
  return normalTails((limit - mean) / Math.sqrt(variance)).lower;
}

/** The root of x^(d+1) = x + 1, and its negative powers. */
function latticeSteps(dimensions: number): number[] {
  let root = 2;
  for (let turn = 0; turn < 40; turn++) root = (1 + root) ** (1 / (dimensions + 1));
  return Array.from({ length: dimensions }, (_, i) => root ** -(i + 1) % 1);
}

function inside(share: number): number {
  return Math.min(1 - 1e-9, Math.max(1e-9, share));
}
