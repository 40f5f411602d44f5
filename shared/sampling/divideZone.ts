import { groupBy } from '../groupBy.ts';
import { blockSampleSize } from './blockSampleSize.ts';
import { flagWithinGroups } from './outliers.ts';
import { groupVariance } from './pooling.ts';
import { sampleSize } from './sampleSize.ts';
import { moderateVariance } from './shrinkage.ts';
import { pooledVariance, summarise, type VariancePart } from './variances.ts';

/**
 * Would a zone that asks for too many samples be cheaper as two? The cut is sought along one layer among the zone's
 * readings. One degree of freedom is taken off for having chosen the best cut, and each side's spread is pulled
 * towards the common one, so that chance does not pass for two populations. Own rule.
 */
export interface ZoneReading {
  readonly value: number;
  /** Readings of different visits are compared only inside their visit. */
  readonly visit: string;
}
export interface LocatedReading extends ZoneReading {
  /** Layer value at the vine. */
  readonly layer: number;
}

/** What is asked of the zone, and of its parts. */
export interface Demand {
  readonly margin: number;
  readonly confidence: number;
  /** Count of the undivided zone, as the plan has it. */
  readonly presentCount: number;
  /** 'parts': each part must keep the margin; 'whole': only the mean of the present zone must. */
  readonly wanted?: 'parts' | 'whole';
  readonly kind?: 'sd' | 'cv';
  readonly minimum?: number;
  /** Whether readings far from the rest of their part count: as in the plan, or a division would promise what its plan does not ask. */
  readonly outliers?: 'out' | 'in';
  /** Of the measure's figures. */
  readonly resolution?: number;
}

export interface DivideQuestion extends Demand {
  readonly readings: readonly LocatedReading[];
  /** Layer value at every vine of the zone. */
  readonly layerAtVines: readonly number[];
}

export interface Division {
  /** Vines with a layer value up to this go to the first part. */
  readonly cut: number;
  readonly vines: readonly [number, number];
  readonly spreads: readonly [number, number];
  readonly counts: readonly [number, number];
  readonly total: number;
  /** Share of the present count saved; negative when the division costs more. */
  readonly saving: number;
  readonly recommended: boolean;
}

/** Share of the work that must be saved before dividing is advised. */
export const WORTH_DIVIDING = 0.2;
const MINIMUM_READINGS = 6;
const MINIMUM_SHARE = 0.2;
const PRIOR_DF = 6;

/** Best division along the layer, or null with fewer than six readings on each side of every possible cut. */
export function bestDivision(question: DivideQuestion): Division | null {
  return divisionsAlong(question)[0] ?? null;
}

/** Divisions along the layer, cheapest first, ties to the lower cut; one for each gap between readings that leaves six on each side. */
export function divisionsAlong(question: DivideQuestion): Division[] {
  const sorted = [...new Set(question.readings.map(({ layer }) => layer))].sort((a, b) => a - b);
  return sorted.slice(1).flatMap((layer, i) => divideAt((sorted[i]! + layer) / 2, question) ?? []).sort((a, b) => a.total - b.total);
}

function divideAt(cut: number, question: DivideQuestion): Division | null {
  const { readings, layerAtVines } = question;
  const below = layerAtVines.filter((layer) => layer <= cut).length;
  return judgeParts(question, { cut, sides: [readings.filter(({ layer }) => layer <= cut), readings.filter(({ layer }) => layer > cut)], vines: [below, layerAtVines.length - below] });
}

/** Readings and vines of both parts of a zone. */
export interface ZoneParts {
  readonly cut: number;
  readonly sides: readonly [readonly ZoneReading[], readonly ZoneReading[]];
  readonly vines: readonly [number, number];
}

/**
 * What two given parts of a zone ask for, or null where a part has fewer than six readings or less than a fifth of the vines.
 * Parts that follow rows are not quite those of the layer's line, and one vine on the wrong side can double a count.
 */
export function judgeParts(question: Demand, { cut, sides, vines }: ZoneParts): Division | null {
  const { margin, confidence, presentCount, wanted = 'parts', minimum } = question;
  if (sides.some((side) => side.length < MINIMUM_READINGS)) return null;
  if (Math.min(...vines) < MINIMUM_SHARE * (vines[0] + vines[1])) return null;
  const own = sides.map((side) => withinVisits(side, question));
  const common = pooledVariance(own);
  if (common.df <= 1) return null;
  const prior = { variance: (common.variance * common.df) / (common.df - 1), df: Math.min(PRIOR_DF, common.df) };
  const [first, second] = own.map((part) => Math.sqrt(moderateVariance(part, prior).variance)) as [number, number];
  const spreads: [number, number] = [first, second];
  const counts = countParts({ vines, spreads, margin, confidence, wanted, minimum });
  const total = counts[0] + counts[1];
  const saving = 1 - total / presentCount;
  return { cut, vines, spreads, counts, total, saving, recommended: saving >= WORTH_DIVIDING };
}

function withinVisits(readings: readonly ZoneReading[], { kind = 'sd', outliers = 'in', resolution = 0 }: Demand): VariancePart {
  const visits = [...groupBy(readings, ({ visit }) => visit).values()].map((group) => group.map(({ value }) => value));
  const flags = outliers === 'in' ? null : flagWithinGroups(visits, { relative: kind === 'cv', resolution });
  return pooledVariance(visits.map((values, i) => groupVariance(values.filter((_, j) => !flags?.[i]![j]), kind)));
}

function countParts(parts: { vines: readonly [number, number]; spreads: [number, number]; margin: number; confidence: number; wanted: 'parts' | 'whole'; minimum?: number }): [number, number] {
  const { vines, spreads, margin, confidence, wanted, minimum } = parts;
  if (wanted === 'whole') {
    const zones = vines.map((count, i) => ({ vines: count, sd: spreads[i]!, minimum }));
    const { counts } = blockSampleSize({ zones, margin, confidence, method: 'spread' });
    return [counts[0]!, counts[1]!];
  }
  const n = vines.map((count, i) => sampleSize({ spread: spreads[i]!, margin, confidence, populationSize: count, minimum }).n);
  return [n[0]!, n[1]!];
}

/** Spread of two zones taken as one: inside both, and between their means when they are known. */
export function mergedSpread(parts: readonly { readonly vines: number; readonly sd: number; readonly mean: number | null }[]): number {
  const vines = parts.reduce((sum, part) => sum + part.vines, 0);
  const within = parts.reduce((sum, part) => sum + (part.vines / vines) * part.sd ** 2, 0);
  const means = parts.map((part) => part.mean).filter((mean) => mean !== null);
  if (means.length < parts.length) return Math.sqrt(within);
  const centre = parts.reduce((sum, part) => sum + (part.vines / vines) * part.mean!, 0);
  const between = parts.reduce((sum, part) => sum + (part.vines / vines) * (part.mean! - centre) ** 2, 0);
  return Math.sqrt(within + between);
}

/** How far two parts differ in their means, for the sentence that explains a division. */
export function partMeans([first, second]: ZoneParts['sides']): readonly [number, number] {
  const mean = (side: readonly ZoneReading[]) => summarise(side.map(({ value }) => value)).mean;
  return [mean(first), mean(second)];
}
