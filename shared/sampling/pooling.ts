import { ageWeighted, pooledVariance, SEASON_WEIGHT, summarise, type VariancePart } from './variances.ts';

/**
 * Spread between vines from earlier readings: pooled inside zone × season × visit, never across dates, because a
 * trend of ripening is not sampling noise (four readings in each of two seasons: 0.18 within, 2.31 if thrown together).
 * For measures whose spread grows with the mean, squared coefficients of variation are pooled instead of variances.
 * Source: Σ(n − 1)s²/Σ(n − 1), the mean square within groups of a one-way analysis of variance (textbook); that older
 * seasons count less is judgement.
 */
export interface HistoryReading {
  readonly block: string;
  /** Zone of today's zoning that the vine lies in; null where there is none. */
  readonly zone: string | null;
  /** Calendar year or any number that grows by 1 a season. */
  readonly season: number;
  /** Round or date; readings of one visit may be compared with each other. */
  readonly visit: string;
  readonly value: number;
}

export interface ReadingGroup {
  readonly block: string;
  readonly zone: string | null;
  readonly season: number;
  readonly visit: string;
  readonly values: readonly number[];
}

export type SpreadKind = 'sd' | 'cv';

/** Groups in order of first appearance. */
export function groupReadings(readings: readonly HistoryReading[]): ReadingGroup[] {
  const groups = new Map<string, { head: HistoryReading; values: number[] }>();
  for (const reading of readings) {
    const key = JSON.stringify([reading.block, reading.zone, reading.season, reading.visit]);
    const group = groups.get(key);
    if (group) group.values.push(reading.value);
    else groups.set(key, { head: reading, values: [reading.value] });
  }
  return [...groups.values()].map(({ head, values }) => ({ block: head.block, zone: head.zone, season: head.season, visit: head.visit, values }));
}

/** Variance of one group, or its squared coefficient of variation; nothing to say (df 0) for one reading or a mean of 0. */
export function groupVariance(values: readonly number[], kind: SpreadKind): VariancePart {
  const { n, mean, variance } = summarise(values);
  if (n < 2) return { variance: Number.NaN, df: 0 };
  if (kind === 'sd') return { variance, df: n - 1 };
  return mean === 0 ? { variance: Number.NaN, df: 0 } : { variance: variance / (mean * mean), df: n - 1 };
}

export interface PooledSpread {
  /** Standard deviation or coefficient of variation; NaN when no group has two readings. */
  readonly spread: number;
  /** Degrees of freedom after older seasons were given less weight. */
  readonly df: number;
  /** Readings in groups that counted. */
  readonly n: number;
  readonly seasons: readonly number[];
}

export interface PoolingOptions {
  readonly kind: SpreadKind;
  /** Season being planned; a group's age is counted from it. */
  readonly season: number;
  readonly seasonWeight?: number;
}

export function poolGroups(groups: readonly Pick<ReadingGroup, 'season' | 'values'>[], options: PoolingOptions): PooledSpread {
  const { kind, season, seasonWeight = SEASON_WEIGHT } = options;
  const parts: VariancePart[] = [];
  const seasons = new Set<number>();
  let n = 0;
  for (const group of groups) {
    const part = groupVariance(group.values, kind);
    if (part.df === 0) continue;
    parts.push(ageWeighted(part, season - group.season, seasonWeight));
    seasons.add(group.season);
    n += group.values.length;
  }
  const { variance, df } = pooledVariance(parts);
  return { spread: Math.sqrt(variance), df, n, seasons: [...seasons].sort((a, b) => a - b) };
}
