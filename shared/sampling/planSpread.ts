import { flagWithinGroups } from './outliers.ts';
import type { Spread } from './margins.ts';
import { groupReadings, poolGroups, type HistoryReading, type PooledSpread, type PoolingOptions, type ReadingGroup } from './pooling.ts';
import { sdUpperFactor } from './sdInterval.ts';
import { fitVariancePrior, MINIMUM_ZONES_FOR_FIT, moderateVariance } from './shrinkage.ts';
import { SEASON_WEIGHT, summarise } from './variances.ts';

/**
 * Which spread a plan may assume in each zone, and where it comes from: the zone's own history, the block's, the
 * estate's, or a trade default for which a pilot is advised. Zones with few readings are pulled towards the wider
 * pool (Smyth 2004). Outlying readings are left out of the advised spread unless asked for; the zone's own spread is
 * given both ways.
 */
export type SpreadSource = 'zone' | 'block' | 'estate' | 'trade';

export interface SpreadQuestion {
  readonly block: string;
  /** Zones to plan for, as the readings name them. */
  readonly zones: readonly string[];
  readonly season: number;
  /** Readings of one measure over the estate, already assigned to today's zones by position. */
  readonly readings: readonly HistoryReading[];
  /** Also decides whether standard deviations or coefficients of variation are pooled. */
  readonly tradeDefault: Spread;
  readonly typicalMean?: number | null;
  readonly options?: SpreadOptions;
}

export interface SpreadOptions {
  readonly seasonWeight?: number;
  /** Degrees of freedom below which a zone's own history does not speak for it. */
  readonly minimumOwnDf?: number;
  /** Degrees of freedom below which a pool is passed over for the next wider one. */
  readonly minimumPoolDf?: number;
  /** Weight of the wider pool in degrees of freedom. */
  readonly priorDf?: number;
  /** 'auto' estimates the weight from five zones or more; 'fixed' uses priorDf; 'none' takes each zone as it is. */
  readonly shrinkage?: 'auto' | 'fixed' | 'none';
  /** Plan with the spread that is exceeded with chance 1 − level (0.8 is usual); null plans with the estimate. */
  readonly upperLevel?: number | null;
  readonly resolution?: number;
  /** 'out' (usual) leaves readings far from the rest out of the advised spread. */
  readonly outliers?: 'out' | 'in';
}

export interface ZoneSpread {
  readonly zone: string;
  /** Advised spread: outliers out, shrunk. */
  readonly spread: Spread;
  /** `spread` times `upperFactor`: what the sample size should use. */
  readonly planningSpread: Spread;
  readonly upperFactor: number;
  readonly source: SpreadSource;
  /** Readings and seasons of the source; 0 and none for a trade default. */
  readonly n: number;
  readonly seasons: readonly number[];
  /** Degrees of freedom behind `spread`; null for a trade default. */
  readonly df: number | null;
  /** The zone's own history before shrinking; null without repeated readings. */
  readonly own: PooledSpread | null;
  /** What the zone was shrunk towards; null when it was not. */
  readonly prior: { readonly source: Exclude<SpreadSource, 'zone'>; readonly spread: number; readonly df: number } | null;
  readonly outliers: number;
  /** The zone's own spread with flagged readings left in; null without repeated readings. */
  readonly ownWithOutliers: PooledSpread | null;
  /** The same with them left out. */
  readonly ownWithoutOutliers: PooledSpread | null;
  readonly pilotAdvised: boolean;
  /** Mean of the zone's latest visit, else of the block's, else the typical mean. */
  readonly expectedMean: number | null;
}

interface Pool {
  readonly source: 'block' | 'estate' | 'trade';
  readonly pooled: PooledSpread;
  /** Degrees of freedom it counts for when a zone is pulled towards it. */
  readonly priorDf: number;
}

const DEFAULTS = { seasonWeight: SEASON_WEIGHT, minimumOwnDf: 4, minimumPoolDf: 4, priorDf: 6, shrinkage: 'auto', upperLevel: null, resolution: 0, outliers: 'out' } as const;

export function planSpread(question: SpreadQuestion): ZoneSpread[] {
  const options: Required<SpreadOptions> = { ...DEFAULTS, ...question.options };
  const pooling: PoolingOptions = { kind: question.tradeDefault.kind, season: question.season, seasonWeight: options.seasonWeight };
  const all = groupReadings(question.readings);
  const flags = flagByZone(all, pooling.kind, options.resolution);
  const cleaned = all.map((group, i) => ({ ...group, values: group.values.filter((_, j) => !flags[i]![j]) }));
  const counted = options.outliers === 'in' ? all : cleaned;
  const pools = widerPools(question, counted, { pooling, options });
  return question.zones.map((zone) => {
    const isOwn = (group: ReadingGroup) => group.block === question.block && group.zone === zone;
    const own = poolGroups(counted.filter(isOwn), pooling);
    const [ownWithOutliers, ownWithoutOutliers] = [poolGroups(all.filter(isOwn), pooling), poolGroups(cleaned.filter(isOwn), pooling)];
    const outliers = all.reduce((sum, group, i) => sum + (isOwn(group) ? flags[i]!.filter(Boolean).length : 0), 0);
    const chosen = chooseSpread({ own, floor: roundingVariance(counted.filter(isOwn), pooling.kind, options.resolution) }, pools, options);
    const upperFactor = options.upperLevel === null || chosen.df === null ? 1 : sdUpperFactor(Math.min(chosen.df, 1e6), options.upperLevel);
    const kind = pooling.kind;
    return {
      zone,
      ...chosen,
      spread: { kind, value: chosen.value },
      planningSpread: { kind, value: chosen.value * upperFactor },
      upperFactor,
      own: own.df > 0 ? own : null,
      ownWithOutliers: ownWithOutliers.df > 0 ? ownWithOutliers : null,
      ownWithoutOutliers: ownWithoutOutliers.df > 0 ? ownWithoutOutliers : null,
      outliers,
      pilotAdvised: chosen.source === 'trade',
      expectedMean: expectedMean(counted, question, zone),
    };
  });
}

/** Outliers are judged inside each zone of each block, with one scale for all its visits. */
function flagByZone(groups: readonly ReadingGroup[], kind: 'sd' | 'cv', resolution: number): boolean[][] {
  const flags: boolean[][] = groups.map(() => []);
  const byZone = new Map<string, number[]>();
  groups.forEach((group, i) => {
    const key = JSON.stringify([group.block, group.zone]);
    byZone.set(key, [...(byZone.get(key) ?? []), i]);
  });
  for (const members of byZone.values()) {
    const flagged = flagWithinGroups(members.map((i) => groups[i]!.values), { relative: kind === 'cv', resolution });
    members.forEach((i, j) => {
      flags[i] = flagged[j]!;
    });
  }
  return flags;
}

/** Pools from narrow to wide that hold enough; the trade default is always last. */
function widerPools(question: SpreadQuestion, groups: readonly ReadingGroup[], how: { pooling: PoolingOptions; options: Required<SpreadOptions> }): Pool[] {
  const { pooling, options } = how;
  const blockGroups = groups.filter((group) => group.block === question.block && group.zone !== null);
  const block = poolGroups(blockGroups, pooling);
  const estate = poolGroups(groups, pooling);
  const pools: Pool[] = [];
  if (block.df >= options.minimumPoolDf) pools.push({ source: 'block', ...blockPrior(question, blockGroups, { block, ...how }) });
  if (estate.df >= options.minimumPoolDf) pools.push({ source: 'estate', pooled: estate, priorDf: Math.min(options.priorDf, estate.df) });
  const trade: PooledSpread = { spread: question.tradeDefault.value, df: 0, n: 0, seasons: [] };
  return [...pools, { source: 'trade', pooled: trade, priorDf: options.priorDf }];
}

/** With five zones or more their scatter decides how strongly they are pulled together; else the chosen weight does. */
function blockPrior(question: SpreadQuestion, groups: readonly ReadingGroup[], how: { block: PooledSpread; pooling: PoolingOptions; options: Required<SpreadOptions> }): Omit<Pool, 'source'> {
  const { block, pooling, options } = how;
  const fixed = { pooled: block, priorDf: Math.min(options.priorDf, block.df) };
  if (options.shrinkage !== 'auto') return fixed;
  const parts = question.zones
    .map((zone) => groups.filter((group) => group.zone === zone))
    .map((own) => ({ part: poolGroups(own, pooling), floor: roundingVariance(own, pooling.kind, options.resolution) }))
    .filter(({ part }) => part.df >= 1)
    .map(({ part, floor }) => ({ df: part.df, variance: Math.max(part.spread ** 2, floor) }));
  if (parts.length < MINIMUM_ZONES_FOR_FIT || parts.some((part) => !(part.variance > 0))) return fixed;
  const prior = fitVariancePrior(parts);
  return { pooled: { ...block, spread: Math.sqrt(prior.variance) }, priorDf: prior.df };
}

/** Variance that rounding alone leaves, step² / 12, in the form of the spread: of a share, the step is a share of the mean too. */
function roundingVariance(groups: readonly ReadingGroup[], kind: 'sd' | 'cv', step: number): number {
  if (kind === 'sd' || step === 0) return step ** 2 / 12;
  const values = groups.flatMap((group) => group.values);
  const mean = Math.abs(summarise(values).mean);
  return mean > 0 ? (step / mean) ** 2 / 12 : 0;
}

interface ChosenSpread {
  readonly value: number;
  readonly source: SpreadSource;
  readonly n: number;
  readonly seasons: readonly number[];
  readonly df: number | null;
  readonly prior: ZoneSpread['prior'];
}

function chooseSpread({ own, floor }: { own: PooledSpread; floor: number }, pools: readonly Pool[], options: Required<SpreadOptions>): ChosenSpread {
  // A block with this zone alone has nothing to pull it towards but itself.
  const pool = pools.find((candidate) => candidate.source === 'trade' || candidate.pooled.df - own.df >= 1)!;
  const speaksForItself = own.df >= options.minimumOwnDf;
  const prior = { source: pool.source, spread: pool.pooled.spread, df: pool.priorDf };
  if (speaksForItself && options.shrinkage === 'none') return { value: own.spread, source: 'zone', n: own.n, seasons: own.seasons, df: own.df, prior: null };
  const ownVariance = Math.max(own.spread ** 2, floor);
  const mixed = moderateVariance({ variance: ownVariance, df: own.df }, { variance: pool.pooled.spread ** 2, df: pool.priorDf });
  // With an infinite weight every zone has the pooled value, known as well as the pool knows it.
  const df = mixed.df === Infinity ? pool.pooled.df : mixed.df;
  const value = Math.sqrt(mixed.variance);
  if (speaksForItself) return { value, source: 'zone', n: own.n, seasons: own.seasons, df, prior };
  const { n, seasons } = pool.pooled;
  return { value, source: pool.source, n, seasons, df: pool.source === 'trade' ? null : df, prior: own.df > 0 ? prior : null };
}

function expectedMean(groups: readonly ReadingGroup[], question: SpreadQuestion, zone: string): number | null {
  const inBlock = groups.filter((group) => group.block === question.block && group.values.length > 0);
  const own = inBlock.filter((group) => group.zone === zone);
  const source = own.length > 0 ? own : inBlock;
  const latest = source.reduce<ReadingGroup | null>((best, group) => (best === null || isLater(group, best) ? group : best), null);
  if (latest === null) return question.typicalMean ?? null;
  const visit = source.filter((group) => group.season === latest.season && group.visit === latest.visit);
  return summarise(visit.flatMap((group) => group.values)).mean;
}

/** Visits are named by their date (YYYY-MM-DD) or a number of fixed width, so that text order is time order. */
function isLater(a: ReadingGroup, b: ReadingGroup): boolean {
  return a.season > b.season || (a.season === b.season && a.visit > b.visit);
}
