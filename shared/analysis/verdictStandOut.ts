/**
 * Does a small part of the ground stand out from a block that is otherwise one? A strip of a few rows or a corner is too small to
 * move the correlation at a patch's width, and k-means inertia says little of very unequal parts. So the block is scanned: layers
 * are averaged over a patch, each place's distance from the block's middle is taken in robust deviations over all layers, and the
 * farthest place is compared with the farthest places of random fields (scan statistic: Kulldorff, Huang & Konty 2009; maxima of
 * smooth fields: Friston et al. 1994; both from memory). The fields have the covariance of the rest: values far from the middle are
 * pulled in to 2.5 deviations first (Huber 1964), since a part that stands out would otherwise be in what it is compared with.
 * In: evidence field. Out: the ground that stands out, as far as half of its own peak. Cost: one transform a layer and field.
 */

import { crossTable } from './agreement.ts';
import { TRUSTED_FROM } from './clusterHold.ts';
import { surrogateFields, surrogateModel } from './covarianceSurrogates.ts';
import { fittedSurface, withoutSurface } from './covarianceTrend.ts';
import type { Grid, Labels } from './grid.ts';
import { quantileOfSorted } from './quantile.ts';
import type { Random } from './random.ts';
import { findPatches } from './sievePatches.ts';
import { reason, type VerdictResult } from './verdict.ts';
import { maskedSmoother } from './verdictCalmCells.ts';
import type { EvidenceField } from './verdictField.ts';
import { LEAST_EXPLAINED_TOGETHER, stairShare, stepTogether } from './verdictPlateaus.ts';
import { runThrough, stripePattern, strongestProfile } from './verdictStripes.ts';
import { PROFILE_STEP_M } from './verdictStructure.ts';
import type { ZoneCountAdvice } from './zoneCount.ts';

/** Side of the patch averaged over: narrower ground cannot be worked apart. */
const PATCH_M = 15;
/** A few rows; of coarse cells one is enough. */
const NARROWEST_STRIP_M = 10;
const PULLED_IN_AT = 2.5;
/** Standard deviation of a normal distribution over its median absolute deviation. */
const MAD_TO_SD = 1.4826;
const SURROGATES = 20;
/** As for the gap: three standard deviations above what the random fields do among themselves, as control charts ask. */
const LEAST_DEVIATIONS = 3;
/** More than these are no exceptions. */
const MOST_PARTS = 5;
/** Share of the ground that stands out which zones must show to be made for it. */
const MOST_OF_IT = 0.5;
/** Reasons that are true of the whole block only. */
const SAID_OF_THE_WHOLE: ReadonlySet<string> = new Set(['no-structure', 'plateaus', 'slope-only']);

export interface StandingOut {
  readonly width: number;
  readonly cellSizeM: number;
  /** Number of the part from 1 at each cell of the plane, 0 elsewhere. */
  readonly parts: Uint8Array;
  /** Area of each part in m². */
  readonly areas: readonly number[];
  /** Distance of the farthest place in robust deviations, and the least that counts. */
  readonly farthest: number;
  readonly limit: number;
}

/** Null when nothing stands out. */
export function groundThatStandsOut(found: EvidenceField, random: Random): StandingOut | null {
  const field = { ...found, layers: found.layers.filter((_, l) => !hasSwaths(found, l)) };
  if (field.layers.length === 0) return null;
  const distanceOf = distances(field);
  const rest = field.layers.map((layer) => withoutDrift(field, layer));
  const model = surrogateModel(field, rest.map((layer) => pulledIn(field, layer)));
  const maxima = Array.from(surrogateFields(model, SURROGATES, random), (layers) => highestOf(distanceOf(layers)));
  const mean = maxima.reduce((sum, value) => sum + value / maxima.length, 0);
  const sd = Math.sqrt(maxima.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (maxima.length - 1));
  const limit = mean + LEAST_DEVIATIONS * sd;
  const own = distanceOf(rest);
  const farthest = highestOf(own);
  if (!(farthest > limit)) return null;
  const { parts, areas } = partsAbove(field, own, limit);
  return areas.length === 0 ? null : { width: field.width, cellSizeM: field.cellSizeM, parts, areas, farthest, limit };
}

/**
 * Whether a layer has swaths: stripes that run through the block. Steps that another layer has too are ground, unless they are too
 * many and narrow for it: pictures of one flight have their swaths in common. Evening them out leaves seams, which stand out in turn.
 */
function hasSwaths(field: EvidenceField, l: number): boolean {
  const layer = field.layers[l]!;
  const stepCells = Math.max(1, PROFILE_STEP_M / field.cellSizeM);
  const pattern = stripePattern(field, layer, stepCells);
  if (!pattern.isStriped) return false;
  const across = (values: Float64Array) => strongestProfile(field, values, { pattern, stepCells });
  const profile = across(layer);
  const others = field.layers.filter((_, other) => other !== l).map(across);
  if (stepTogether(profile, others)) return stairShare(profile, Math.floor(NARROWEST_STRIP_M / (stepCells * field.cellSizeM))) < LEAST_EXPLAINED_TOGETHER;
  return runThrough(field, layer, { pattern, stepCells });
}

/** Root mean square over the layers of each place's robust deviation from the middle, after averaging over a patch. */
function distances(field: EvidenceField): (layers: readonly Float64Array[]) => Float64Array {
  // A Gaussian as wide as a box of this side.
  const smoother = maskedSmoother(field, PATCH_M / Math.sqrt(12) / field.cellSizeM);
  return (layers) => {
    const squares = new Float64Array(field.mask.length);
    for (const layer of layers) {
      const smoothed = smoother(layer);
      const { middle, spread } = robust(field, smoothed);
      for (let cell = 0; cell < squares.length; cell++) if (field.mask[cell] === 1) squares[cell] = squares[cell]! + ((smoothed[cell]! - middle) / spread) ** 2 / layers.length;
    }
    return squares.map(Math.sqrt);
  };
}

function withoutDrift(field: EvidenceField, layer: Float64Array): Float64Array {
  return withoutSurface(field, layer, fittedSurface(field, pulledIn(field, layer), 1));
}

function pulledIn(field: EvidenceField, values: Float64Array): Float64Array {
  const { middle, spread } = robust(field, values);
  const reach = PULLED_IN_AT * spread;
  return values.map((value, cell) => (field.mask[cell] === 1 ? Math.max(middle - reach, Math.min(middle + reach, value)) : 0));
}

function robust({ mask }: EvidenceField, values: Float64Array): { middle: number; spread: number } {
  const known = values.filter((_, cell) => mask[cell] === 1).sort();
  const middle = quantileOfSorted(known, 0.5);
  const spread = MAD_TO_SD * quantileOfSorted(known.map((value) => Math.abs(value - middle)).sort(), 0.5);
  return { middle, spread: Math.max(1e-9, spread) };
}

function highestOf(values: Float64Array): number {
  return values.reduce((most, value) => Math.max(most, value), 0);
}

/** From the farthest place down: the ground around it that reaches half of its distance. Parts smaller than a patch are dropped, and places that lie on the flank of a part belong to it. */
function partsAbove({ width, cellSizeM }: EvidenceField, own: Float64Array, limit: number): { parts: Uint8Array; areas: number[] } {
  const parts = new Uint8Array(own.length);
  const areas: number[] = [];
  const seen = new Uint8Array(own.length);
  const peaks = [...own.keys()].filter((cell) => own[cell]! > limit).sort((a, b) => own[b]! - own[a]!);
  for (const peak of peaks) {
    if (seen[peak] === 1 || areas.length === MOST_PARTS) continue;
    const { patchOf, sizes } = findPatches(Uint8Array.from(own, (value) => (value >= own[peak]! / 2 ? 1 : 0)), width);
    const around = [...own.keys()].filter((cell) => patchOf[cell] === patchOf[peak]);
    const isNew = around.every((cell) => seen[cell] === 0) && sizes[patchOf[peak]!]! * cellSizeM ** 2 >= PATCH_M ** 2;
    if (isNew) areas.push(around.length * cellSizeM ** 2);
    for (const cell of around) {
      seen[cell] = 1;
      if (isNew) parts[cell] = areas.length;
    }
  }
  return { parts, areas };
}

/** The number of zones that gives the ground that stands out zones of its own and leaves the rest whole; see `zonesThatShow`. */
export interface Shown {
  readonly k: number;
  /** Share of the ground that stands out which these zones show. */
  readonly share: number;
}

/** Number of the part at a cell of the zones' own finer grid, 0 where nothing stands out. */
export function partsOn({ parts, width, cellSizeM }: Pick<StandingOut, 'parts' | 'width' | 'cellSizeM'>, grid: Grid): (cell: number) => number {
  const side = Math.round(cellSizeM / grid.cellSizeM);
  return (cell) => parts[Math.floor(Math.floor(cell / grid.cols) / side) * width + Math.floor((cell % grid.cols) / side)]!;
}

/**
 * Among the workable numbers the one whose zones show most of the parts, the smaller where several show as much: each zone but one
 * is made of parts, by Jaccard's coefficient as far as Hennig trusts a cluster to be found again. Null when none does.
 */
export function zonesThatShow(ground: StandingOut, grid: Grid, zones: readonly { readonly k: number; readonly labels: Labels }[]): Shown | null {
  const { areas } = ground;
  const partAt = partsOn(ground, grid);
  let best: Shown | null = null;
  for (const { k, labels } of zones) {
    const { counts, columns } = crossTable(Uint8Array.from(labels, (_, cell) => partAt(cell)), labels);
    const shown = shownBy(areas.length, { k, at: (part, zone) => (zone < columns ? (counts[part * columns + zone] ?? 0) : 0) });
    if (shown > 0 && (best === null || shown > best.share)) best = { k, share: shown };
  }
  return best;
}

/** Share of the cells of all parts that lie in parts with a zone of their own; 0 unless the rest is one zone. */
function shownBy(partCount: number, { k, at }: { k: number; at: (part: number, zone: number) => number }): number {
  const numbers = Array.from({ length: k }, (_, i) => i + 1);
  const partNumbers = Array.from({ length: partCount }, (_, i) => i + 1);
  const sizeOf = (part: number) => numbers.reduce((sum, zone) => sum + at(part, zone), 0);
  const homeOf = (part: number) => numbers.reduce((most, zone) => (at(part, zone) > at(part, most) ? zone : most));
  let [ownZones, shown] = [0, 0];
  for (const zone of numbers) {
    const own = partNumbers.filter((part) => homeOf(part) === zone);
    const inside = own.reduce((sum, part) => sum + at(part, zone), 0);
    const either = own.reduce((sum, part) => sum + sizeOf(part) - at(part, zone), 0) + [0, ...partNumbers].reduce((sum, part) => sum + at(part, zone), 0);
    if (own.length === 0 || inside / either < TRUSTED_FROM) continue;
    ownZones++;
    shown += own.reduce((sum, part) => sum + sizeOf(part), 0);
  }
  return ownZones === k - 1 ? shown / partNumbers.reduce((sum, part) => sum + sizeOf(part), 0) : 0;
}

/** The verdict and the number with what stands out from a block without other structure: zones that show it are worth it; where they do not, ground that stands out is told, unless steps speak for zones anyway. */
export function withStandOut(verdict: VerdictResult, { ground, count, shownBy }: { ground: StandingOut | null; count: ZoneCountAdvice; shownBy: (ground: StandingOut) => Shown | null }): { verdict: VerdictResult; count: ZoneCountAdvice } {
  if (ground === null) return { verdict, count };
  const shown = shownBy(ground);
  const isShown = shown !== null && shown.share >= MOST_OF_IT;
  if (!isShown && verdict.verdict === 'several') return { verdict, count };
  const figures = { hectares: ground.areas.reduce((sum, area) => sum + area, 0) / 10_000, parts: ground.areas.length, farthest: ground.farthest, limit: ground.limit };
  const others = verdict.reasons.filter(({ code }) => !SAID_OF_THE_WHOLE.has(code));
  return {
    verdict: { ...verdict, verdict: isShown ? 'several' : 'test', reasons: [reason(isShown ? 'stands-out' : 'stands-out-apart', null, figures), ...others] },
    count: isShown ? { ...count, best: shown.k, alsoOffer: [] } : count,
  };
}
