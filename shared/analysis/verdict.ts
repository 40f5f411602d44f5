/**
 * Treat the block as one, worth testing, or several zones? Two questions: does anything resemble itself at a workable scale
 * in every direction (noise and a sensor's stripes do not), and are there plateaus and steps beyond what random fields with
 * the layers' own slope and covariance show (a mere slope has none)? Only layers measured on the vines or in the soil vote.
 * In: figures from verdictStructure and verdictGap. Out: the verdict and its reasons as codes with figures; the words are
 * made elsewhere. The limits are our own, set on simulated blocks; the size of the difference is printed beside the verdict.
 */

import type { GapAtK } from './verdictGap.ts';
import type { LayerStructure } from './verdictStructure.ts';

export type Verdict = 'one' | 'test' | 'several';

export type VerdictReasonCode =
  | 'no-structure'
  | 'structure'
  | 'stripes-evened'
  | 'stands-out'
  | 'stands-out-apart'
  | 'plateaus'
  | 'slope-only'
  | 'one-layer'
  | 'no-measured-layer'
  | 'too-small'
  | 'not-tested-on-fruit'
  | 'few-readings'
  | 'readings-in-one-zone'
  | 'fruit-agrees'
  | 'fruit-silent'
  | 'fruit-unclear'
  | 'fruit-disagrees';

export interface VerdictReason {
  readonly code: VerdictReasonCode;
  /** Layer or measure the reason is about. */
  readonly about: string | null;
  /** Named figures for the sentence: value, limit, k … */
  readonly figures: Readonly<Record<string, number>>;
}

export interface VerdictResult {
  readonly verdict: Verdict;
  /** False when the layers alone cannot tell: a block too small, or no measured layer. */
  readonly isJudged: boolean;
  readonly reasons: readonly VerdictReason[];
  /** Mean and highest structure of the evidence layers and the best gap; null without measured layers. */
  readonly meanStructure: number | null;
  readonly highestStructure: number | null;
  readonly bestGap: number | null;
}

/** Below these a layer does not resemble itself at one patch width; with one layer there is no mean to steady it. */
const LEAST_MEAN_STRUCTURE = 0.12;
const LEAST_HIGHEST_STRUCTURE = 0.25;
const LEAST_SINGLE_STRUCTURE = 0.2;
/** A gap of 0.5 leaves 40 % less within the zones than in fields without zones; small blocks need more to be believed. */
const LEAST_GAP = 0.5;
const LEAST_GAP_SMALL = 0.65;
/**
 * … and it must lie above what one more random field would reach in 99 % (prediction limit from 20: Student's t of 2.54 times √1.05), so
 * that the five numbers tried pass together in at most 5 %. One layer has no second to steady it: three deviations, as control charts ask.
 */
const LEAST_GAP_DEVIATIONS = 2.6;
const LEAST_GAP_DEVIATIONS_SINGLE = 3;
export const SMALL_AREA_M2 = 10_000;

export interface VerdictInput {
  readonly areaM2: number;
  /** One id for each structure, in the same order. */
  readonly layerIds: readonly string[];
  readonly structures: readonly LayerStructure[];
  readonly curve: readonly GapAtK[];
  /** Layers whose narrow stripes were evened out before the curve was made. */
  readonly evenedIds?: readonly string[];
}

export function judge({ areaM2, layerIds, structures, curve, evenedIds = [] }: VerdictInput): VerdictResult {
  if (structures.length === 0) return withoutEvidence();
  const values = structures.map(({ structure }) => structure);
  const meanStructure = values.reduce((sum, value) => sum + value, 0) / values.length;
  const highestStructure = Math.max(...values);
  const best = curve.reduce((most, row) => (row.gap > most.gap ? row : most));
  const gapLimit = areaM2 < SMALL_AREA_M2 ? LEAST_GAP_SMALL : LEAST_GAP;
  const hasPlateaus = best.gap >= gapLimit && best.gap >= (values.length === 1 ? LEAST_GAP_DEVIATIONS_SINGLE : LEAST_GAP_DEVIATIONS) * best.gapSd;
  const isStriped = structures.some((layer) => layer.isStriped);
  const isSmooth = hasStructure(values, meanStructure, highestStructure);
  // Swaths have levels of their own, which look like plateaus; steps count against missing structure only without stripes.
  const verdict: Verdict = !isSmooth && !(hasPlateaus && !isStriped) ? 'one' : hasPlateaus ? 'several' : 'test';
  // Steps that outweigh missing structure are the reason then; "noise" beside them would contradict.
  const reasons: VerdictReason[] = [
    ...(verdict === 'several' && !isSmooth ? [] : [reason(isSmooth ? 'structure' : 'no-structure', null, { value: meanStructure, highest: highestStructure, limit: values.length === 1 ? LEAST_SINGLE_STRUCTURE : LEAST_MEAN_STRUCTURE })]),
    reason(hasPlateaus ? 'plateaus' : 'slope-only', null, { value: best.gap, limit: gapLimit, deviations: best.gap / best.gapSd, k: best.k }),
    ...structures.flatMap((layer, i) => (layer.isStriped || evenedIds.includes(layerIds[i]!) ? [reason('stripes-evened', layerIds[i]!, {})] : [])),
  ];
  if (values.length === 1) reasons.push(reason('one-layer', layerIds[0]!, {}));
  if (areaM2 < SMALL_AREA_M2) reasons.push(reason('too-small', null, { value: areaM2, limit: SMALL_AREA_M2 }));
  return { verdict, isJudged: areaM2 >= SMALL_AREA_M2, reasons, meanStructure, highestStructure, bestGap: best.gap };
}

export function reason(code: VerdictReasonCode, about: string | null, figures: Readonly<Record<string, number>>): VerdictReason {
  return { code, about, figures };
}

function hasStructure(values: readonly number[], mean: number, highest: number): boolean {
  return values.length === 1 ? highest >= LEAST_SINGLE_STRUCTURE : mean >= LEAST_MEAN_STRUCTURE || highest >= LEAST_HIGHEST_STRUCTURE;
}

/** Terrain and soil maps are structured by construction, so they say nothing about whether the vines differ. */
function withoutEvidence(): VerdictResult {
  return { verdict: 'test', isJudged: false, reasons: [reason('no-measured-layer', null, {})], meanStructure: null, highestStructure: null, bestGap: null };
}
