import { ASSUMED_GROWTH_HALF_WIDTH, estimateYield, type YieldEstimate, type YieldPart } from '../../../shared/cellar/yield.ts';
import { nextLot, type LearnedFactor } from '../../../shared/cellar/learnFactor.ts';
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
  tonnes: Estimate;
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
    const newest = (code: string) => newestVisit(own.filter((reading) => reading.measureCode === code), bearing);
    const clusters = newest('clusterCount');
    const weight = newest('clusterWeight');
    const beforeVeraison = weight !== null && season.phases.veraison !== undefined && weight.visit < season.phases.veraison[0];
    const variety = ground.block.variety;
    const growth = beforeVeraison ? (input.factors.growth.get(variety) ?? 'assumed') : 'none';
    const parts = yieldParts({ clusters, weight, measureOf, growth, losses: input.factors.losses.get(variety) ?? null, counted: ground.block.census === 'full' });
    const estimate = estimateYield({
      places: indexes.length,
      missingShare: indexes.length === 0 ? 0 : 1 - bearing / indexes.length,
      clustersPerVine: parts.value('clusters'),
      clusterWeightG: parts.value('clusterWeight'),
      growthFactor: parts.value('growth'),
      lossShare: parts.value('losses'),
      relativeErrors: parts.errors,
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
      tonnes: { value: estimate.tonnes, standardError: Math.max(estimate.standardErrorT, estimate.halfWidthT / criticalT(boardConfidence, Infinity)), df: Infinity },
      parts: estimate.parts.map(({ part, share }) => ({ part, share, kind: parts.kind(part), value: part === 'vines' ? bearing : parts.value(part), n: parts.n(part) })),
      latest,
      unchecked,
      latestOn: Object.values(latest).reduce<string | null>((newestDay, mean) => (mean && (newestDay === null || mean.visit > newestDay) ? mean.visit : newestDay), null),
    };
  });
}

/** The mean of the newest day on which the zone was measured. */
function newestVisit(readings: ZonedReading[], bearing: number): VisitMean | null {
  const day = readings.reduce<string | null>((newest, reading) => (newest === null || reading.visit > newest ? reading.visit : newest), null);
  return day === null ? null : visitMean(readings.filter((reading) => reading.visit === day), bearing);
}

function yieldParts(facts: { clusters: VisitMean | null; weight: VisitMean | null; measureOf: (code: string) => MeasureRecord; growth: LearnedFactor | 'assumed' | 'none'; losses: LearnedFactor | null; counted: boolean }) {
  const assumed = (code: string) => {
    const measure = facts.measureOf(code);
    return { value: measure.typicalMean, relativeError: measure.spreadKind === 'cv' ? measure.spreadValue : measure.spreadValue / measure.typicalMean };
  };
  const told = (mean: VisitMean | null, code: string) => {
    if (mean === null || !(mean.estimate.standardError >= 0) || mean.estimate.value <= 0) return { ...assumed(code), kind: 'assumed' as const, n: null };
    return { value: mean.estimate.value, relativeError: mean.estimate.standardError / mean.estimate.value, kind: 'measured' as const, n: mean.n };
  };
  const table: Record<YieldPart, { value: number; relativeError: number; kind: 'measured' | 'assumed'; n: number | null }> = {
    vines: { value: 0, relativeError: facts.counted ? 0 : uncountedVines, kind: facts.counted ? 'measured' : 'assumed', n: null },
    clusters: told(facts.clusters, 'clusterCount'),
    clusterWeight: told(facts.weight, 'clusterWeight'),
    growth: growthPart(facts.growth),
    losses: facts.losses === null ? { value: assumedLosses.share, relativeError: assumedLosses.relativeError, kind: 'assumed', n: null } : { value: facts.losses.mean, relativeError: nextLot(facts.losses).standardError / (1 - facts.losses.mean), kind: 'measured', n: facts.losses.n },
  };
  return {
    value: (part: YieldPart) => table[part].value,
    kind: (part: YieldPart) => table[part].kind,
    n: (part: YieldPart) => table[part].n,
    errors: Object.fromEntries(Object.entries(table).map(([part, { relativeError }]) => [part, relativeError])) as Record<YieldPart, number>,
  };
}

function growthPart(growth: LearnedFactor | 'assumed' | 'none'): { value: number; relativeError: number; kind: 'measured' | 'assumed'; n: number | null } {
  if (growth === 'none') return { value: 1, relativeError: 0, kind: 'measured', n: null };
  // The width of an assumed growth factor is the ± 30 % that such estimates have missed by, as a 95 % limit.
  if (growth === 'assumed') return { value: assumedGrowth, relativeError: ASSUMED_GROWTH_HALF_WIDTH / criticalT(boardConfidence, Infinity), kind: 'assumed', n: null };
  return { value: growth.mean, relativeError: nextLot(growth).standardError / growth.mean, kind: 'measured', n: growth.n };
}

/** An estimate as a figure for the screen. */
export function figureOf(estimate: Estimate, how: { n: number | null; kind: Figure['kind'] }): Figure {
  const known = Number.isFinite(estimate.standardError);
  return {
    value: estimate.value,
    standardError: known ? estimate.standardError : null,
    halfWidth: known && estimate.df > 0 ? criticalT(boardConfidence, estimate.df) * estimate.standardError : null,
    n: how.n,
    confidence: boardConfidence,
    kind: how.kind,
  };
}
