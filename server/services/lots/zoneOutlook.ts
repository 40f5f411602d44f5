import { ASSUMED_GROWTH_HALF_WIDTH, estimateYield, YIELD_PARTS, type YieldEstimate, type YieldPart } from '../../../shared/cellar/yield.ts';
import { nextLot, type LearnedFactor } from '../../../shared/cellar/learnFactor.ts';
import { dependent, type Dependent, type ErrorTerm } from '../../../shared/cellar/dependent.ts';
import type { Figure, LotZone } from '../../../shared/contracts/lots.ts';
import type { Estimate } from '../../../shared/sampling/precision.ts';
import { criticalT } from '../../../shared/sampling/quantiles.ts';
import { isBearing, type BlockVines } from '../../ground/blockVines.ts';
import { isFirm, type ZonedReading } from '../../ground/zonedReadings.ts';
import type { MeasureRecord } from '../../models/MeasureRecord.ts';
import type { Season } from '../../models/Season.ts';
import { visitMean, type VisitMean } from '../../ground/visitMean.ts';

/** Growth from lag phase to harvest, and losses, while the estate has no history of its own: common practice. */
export const assumedGrowth = 2;
export const assumedLosses = { share: 0.03, relativeError: 0.02 };
/** Relative error of a census that nobody has made. */
const uncountedVines = 0.03;

export const boardConfidence = 0.95;

/** Factors of the estate's own that are switched on, by variety, litres by wine. */
export interface UsedFactors {
  growth: ReadonlyMap<string, LearnedFactor>;
  losses: ReadonlyMap<string, LearnedFactor>;
  mustL: ReadonlyMap<string, LearnedFactor>;
  wineL: ReadonlyMap<string, LearnedFactor>;
  tankOffset: ReadonlyMap<string, LearnedFactor>;
}

const none: ReadonlyMap<string, LearnedFactor> = new Map();
export const noFactors: UsedFactors = { growth: none, losses: none, mustL: none, wineL: none, tankOffset: none };

export interface ZoneOutlook {
  zone: number;
  /** Clusters were weighed before veraison, so that they grow on. */
  beforeVeraison: boolean;
  vines: number;
  bearing: number;
  yield: YieldEstimate;
  tonnes: Dependent;
  parts: LotZone['yieldParts'];
  latest: Record<'brix' | 'ph' | 'ta', VisitMean | null>;
  latestOn: string | null;
  /** Figures of fruit that nobody has checked yet; they count in nothing here. */
  unchecked: number;
}

/** What to expect of each zone of a block: tonnes with their parts, and the newest composition. */
export function zoneOutlooks(input: { ground: BlockVines; zoneOf: Uint8Array; zoneNumbers: number[]; readings: ZonedReading[]; measures: MeasureRecord[]; season: Season; factors: UsedFactors }): ZoneOutlook[] {
  const { ground, zoneOf, readings, season } = input;
  const measureOf = (code: string) => input.measures.find((measure) => measure.code === code)!;
  const counted = readings.filter(isFirm);
  return input.zoneNumbers.map((zone) => {
    const own = counted.filter((reading) => reading.zone === zone);
    const indexes = [...zoneOf.keys()].filter((vine) => zoneOf[vine] === zone);
    const bearing = indexes.filter((vine) => isBearing(ground.states[vine]!)).length;
    const newest = (code: string) => newestVisit(own.filter((reading) => reading.measureCode === code), { bearing, decimals: measureOf(code).decimals });
    const clusters = newest('clusterCount');
    const weight = newest('clusterWeight');
    const beforeVeraison = weight !== null && season.phases.veraison !== undefined && weight.visit < season.phases.veraison[0];
    const variety = ground.block.variety;
    const growth = beforeVeraison ? (input.factors.growth.get(variety) ?? 'assumed') : 'none';
    const parts = yieldParts({ clusters, weight, measureOf, growth, losses: input.factors.losses.get(variety) ?? null, counted: ground.block.census === 'full', block: ground.block });
    const estimate = estimateYield({
      places: indexes.length,
      missingShare: indexes.length === 0 ? 0 : 1 - bearing / indexes.length,
      clustersPerVine: parts.value('clusters'),
      clusterWeightG: parts.value('clusterWeight'),
      growthFactor: parts.value('growth'),
      lossShare: parts.value('losses'),
      relativeErrors: parts.errors,
      degreesOfFreedom: parts.df,
      confidence: boardConfidence,
      growthIsAssumed: growth === 'assumed',
    });
    const unchecked = readings.filter((reading) => reading.zone === zone && reading.excludedReason === null && !isFirm(reading)).length;
    const latest = { brix: newest('brix'), ph: newest('ph'), ta: newest('ta') };
    return {
      zone,
      beforeVeraison,
      vines: indexes.length,
      bearing,
      yield: estimate,
      tonnes: tonnesOf(estimate, parts),
      parts: estimate.parts.map(({ part, share }) => ({ part, share, kind: parts.kind(part), value: part === 'vines' ? bearing : parts.value(part), n: parts.n(part) })),
      latest,
      unchecked,
      latestOn: Object.values(latest).reduce<string | null>((newestDay, mean) => (mean && (newestDay === null || mean.visit > newestDay) ? mean.visit : newestDay), null),
    };
  });
}

/** The mean of the newest day on which the zone was measured. */
function newestVisit(readings: ZonedReading[], how: { bearing: number; decimals: number }): VisitMean | null {
  const day = readings.reduce<string | null>((newest, reading) => (newest === null || reading.visit > newest ? reading.visit : newest), null);
  return day === null ? null : visitMean(readings.filter((reading) => reading.visit === day), how);
}

interface PartFacts {
  value: number;
  relativeError: number;
  df: number;
  kind: 'measured' | 'assumed';
  n: number | null;
  /** What errs in the same way in every zone that names it; null for what the zone has to itself. */
  sharedAs: string | null;
}
type Parts = ReturnType<typeof yieldParts>;

function yieldParts(facts: { clusters: VisitMean | null; weight: VisitMean | null; measureOf: (code: string) => MeasureRecord; growth: LearnedFactor | 'assumed' | 'none'; losses: LearnedFactor | null; counted: boolean; block: { id: string; variety: string } }) {
  const { block } = facts;
  const told = (mean: VisitMean | null, code: string): PartFacts => {
    if (mean !== null && mean.estimate.standardError >= 0 && mean.estimate.value > 0) {
      return { value: mean.estimate.value, relativeError: mean.estimate.standardError / mean.estimate.value, df: mean.estimate.df, kind: 'measured', n: mean.n, sharedAs: null };
    }
    const { typicalMean, spreadKind, spreadValue } = facts.measureOf(code);
    return { value: typicalMean, relativeError: spreadKind === 'cv' ? spreadValue : spreadValue / typicalMean, df: Infinity, kind: 'assumed', n: null, sharedAs: `${code} ${block.id}` };
  };
  const table: Record<YieldPart, PartFacts> = {
    vines: { value: 0, relativeError: facts.counted ? 0 : uncountedVines, df: Infinity, kind: facts.counted ? 'measured' : 'assumed', n: null, sharedAs: `vines ${block.id}` },
    clusters: told(facts.clusters, 'clusterCount'),
    clusterWeight: told(facts.weight, 'clusterWeight'),
    growth: growthPart(facts.growth, block.variety),
    losses: lossesPart(facts.losses, block.variety),
  };
  const each = (of: 'relativeError' | 'df') => Object.fromEntries(Object.entries(table).map(([part, one]) => [part, one[of]])) as Record<YieldPart, number>;
  return {
    value: (part: YieldPart) => table[part].value,
    kind: (part: YieldPart) => table[part].kind,
    n: (part: YieldPart) => table[part].n,
    sharedAs: (part: YieldPart) => table[part].sharedAs,
    errors: each('relativeError'),
    df: each('df'),
  };
}

function growthPart(growth: LearnedFactor | 'assumed' | 'none', variety: string): PartFacts {
  if (growth === 'none') return { value: 1, relativeError: 0, df: Infinity, kind: 'measured', n: null, sharedAs: null };
  // The width of an assumed growth factor is the ± 30 % that such estimates have missed by, as a 95 % limit.
  if (growth === 'assumed') return { value: assumedGrowth, relativeError: ASSUMED_GROWTH_HALF_WIDTH / criticalT(boardConfidence, Infinity), df: Infinity, kind: 'assumed', n: null, sharedAs: 'growth' };
  const next = nextLot(growth);
  return { value: growth.mean, relativeError: next.standardError / growth.mean, df: next.df, kind: 'measured', n: growth.n, sharedAs: `growth ${variety}` };
}

function lossesPart(losses: LearnedFactor | null, variety: string): PartFacts {
  if (losses === null) return { value: assumedLosses.share, relativeError: assumedLosses.relativeError, df: Infinity, kind: 'assumed', n: null, sharedAs: 'losses' };
  const next = nextLot(losses);
  return { value: losses.mean, relativeError: next.standardError / (1 - losses.mean), df: next.df, kind: 'measured', n: losses.n, sharedAs: `losses ${variety}` };
}

/** Tonnes with what the zone has to itself and what it shares with others apart. */
function tonnesOf({ tonnes }: YieldEstimate, parts: Parts): Dependent {
  const own: ErrorTerm[] = [];
  const shared: Record<string, ErrorTerm> = {};
  for (const part of YIELD_PARTS) {
    const term = { standardError: tonnes * parts.errors[part], df: parts.df[part] };
    const key = parts.sharedAs(part);
    if (key === null) own.push(term);
    else if (term.standardError > 0) shared[key] = term;
  }
  return dependent(tonnes, own, shared);
}

/** An estimate as a figure for the screen. */
export function figureOf(estimate: Estimate | Dependent, how: { n: number | null; kind: Figure['kind'] }): Figure {
  const known = Number.isFinite(estimate.standardError);
  return {
    value: estimate.value,
    standardError: known ? estimate.standardError : null,
    halfWidth: known && estimate.df > 0 ? criticalT(boardConfidence, estimate.df) * estimate.standardError : null,
    n: how.n,
    confidence: boardConfidence,
    kind: how.kind,
    ...('shared' in estimate ? { shared: Object.fromEntries(Object.entries(estimate.shared).map(([key, { standardError }]) => [key, standardError])) } : {}),
  };
}
