/**
 * Is there anything at a workable scale? Per evidence layer the correlation with itself at one patch width, second lowest
 * of six directions, with a guard against a sensor's stripes. In: evidence field, block area. Out: one figure a layer.
 */

import { lagSums, secondLowest, sectorCorrelations } from './covariance.ts';
import type { EvidenceField } from './verdictField.ts';
import { arePlateaus } from './verdictPlateaus.ts';
import { stripePattern, strongestProfile, withoutStripes } from './verdictStripes.ts';

/** A patch narrower than this cannot be worked apart; one much wider is zoned whatever it is. */
const NARROWEST_PATCH_M = 15;
const WIDEST_PATCH_M = 40;
export const PROFILE_STEP_M = 3;

/** Width at which a layer must still resemble itself: a sixth of the block's width, 15 to 40 m. */
export function patchWidthM(areaM2: number): number {
  return Math.min(WIDEST_PATCH_M, Math.max(NARROWEST_PATCH_M, Math.sqrt(areaM2) / 6));
}

export interface LayerStructure {
  /** Correlation at one patch width in the second worst direction, after stripes are evened out. */
  readonly structure: number;
  readonly byDirection: readonly number[];
  readonly isStriped: boolean;
}

/** One entry for each layer of the field. */
export function layerStructures(field: EvidenceField, areaM2: number): LayerStructure[] {
  const distanceCells = patchWidthM(areaM2) / field.cellSizeM;
  const stepCells = Math.max(1, PROFILE_STEP_M / field.cellSizeM);
  const structureOf = (values: Float64Array) => sectorCorrelations(lagSums(field, values), distanceCells, 1);
  return field.layers.map((layer) => {
    const sectors = structureOf(layer);
    const plain = secondLowest(sectors);
    const pattern = stripePattern(field, layer, stepCells);
    const across = (values: Float64Array) => strongestProfile(field, values, { pattern, stepCells });
    const isStriped = pattern.isStriped && !arePlateaus(across(layer), field.layers.filter((other) => other !== layer).map(across), stepCells * field.cellSizeM);
    // What is left is measured against the layer's own variance, so that it counts only as far as it matters.
    const structure = isStriped ? Math.min(plain, secondLowest(structureOf(withoutStripes(field, layer, { pattern, stepCells })))) : plain;
    return { structure, byDirection: sectors.correlations, isStriped };
  });
}
