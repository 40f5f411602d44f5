import { mergedSpread } from './divideZone.ts';
import { matchMargin, type Spread } from './margins.ts';
import type { PilotReadings } from './pilotReadings.ts';

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
 * Spread and mean of zones taken as one: the spread inside each, and that between their means (Cochran 1977, §5.6, the
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

/** A zone with what the pilot read in it. */
export interface PilotPart {
  readonly vines: number;
  readonly pilot: PilotReadings | null;
}

/**
 * What a pilot that was drawn zone by zone says of zones taken as one, so that the two-stage rule holds for the pool:
 *   s² = Σ W s²(1 − (1 − W)/n) + Σ W (m − M)²,   W the zone's share of the vines, M = Σ W m,
 * which is on average the variance over all vines of the pool, however the pilot was shared among the zones (Cochran
 * 1977, §5A.11); its degrees of freedom after Satterthwaite 1946, rounded down. Null where a zone of the pool has no
 * pilot of two vines or more. Between zones that were read on different days the days' difference counts as theirs,
 * which errs to the safe side.
 */
export function mergedPilot(parts: readonly PilotPart[], kind: 'sd' | 'cv'): PilotReadings | null {
  const vines = parts.reduce((sum, part) => sum + part.vines, 0);
  const zones = parts.flatMap(({ vines: own, pilot }) => (pilot === null || pilot.mean === null ? [] : [{ weight: own / vines, n: pilot.n, df: pilot.df, mean: pilot.mean, sd: kind === 'cv' ? pilot.spread * Math.abs(pilot.mean) : pilot.spread }]));
  if (zones.length < parts.length) return null;
  const mean = zones.reduce((sum, zone) => sum + zone.weight * zone.mean, 0);
  let [variance, uncertainty] = [0, 0];
  for (const { weight, n, df, mean: own, sd } of zones) {
    const within = weight * sd ** 2 * (1 - (1 - weight) / n);
    variance += within + weight * (own - mean) ** 2;
    uncertainty += (2 * within ** 2) / df + (4 * weight ** 2 * (own - mean) ** 2 * sd ** 2) / n;
  }
  const n = zones.reduce((sum, zone) => sum + zone.n, 0);
  const df = uncertainty > 0 ? Math.max(1, Math.floor((2 * variance ** 2) / uncertainty)) : n - zones.length;
  const sd = Math.sqrt(variance);
  return { n, df, mean, spread: kind === 'cv' ? sd / Math.abs(mean) : sd };
}
