import { mergedSpread } from './divideZone.ts';
import { matchMargin, type Spread } from './margins.ts';

/** A zone as it goes into a larger one: bearing vines, spread between them, and mean where one is known. */
export interface ZonePart {
  readonly vines: number;
  readonly spread: Spread;
  readonly mean: number | null;
}

export interface MergedFigures {
  readonly spread: Spread;
  readonly mean: number | null;
}

/**
 * Spread and mean of zones taken as one: the spread inside each, and that between their means (Cochran 1977, §5.9, the
 * parts of a total variance). Spreads that are shares of the mean stay shares; without means nothing is known of the
 * difference, and only the spreads inside are pooled.
 */
export function mergedFigures(parts: readonly ZonePart[]): MergedFigures {
  const vines = parts.reduce((sum, part) => sum + part.vines, 0);
  const means = parts.map(({ mean }) => mean);
  const mean = means.includes(null) ? null : parts.reduce((sum, part) => sum + (part.vines / vines) * part.mean!, 0);
  const kind = parts[0]!.spread.kind;
  const asShares = kind === 'cv' && mean === null;
  const sd = mergedSpread(parts.map((part) => ({
    vines: part.vines,
    sd: asShares ? part.spread.value : matchMargin(part.spread, { kind: 'absolute', value: 1 }, part.mean).spread,
    mean: asShares ? null : part.mean,
  })));
  return { spread: { kind, value: kind === 'cv' && mean !== null ? sd / Math.abs(mean) : sd }, mean };
}
