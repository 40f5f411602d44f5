/**
 * Do the edges of a soil map or terrain layer lie where the measured layers change? Boundary overlap (Fortin, Drapeau &
 * Jacquez 1996; Jacquez et al. 2000, from memory): rank correlation of the two edge strengths, against what it is between the
 * context layer and random fields that vary like the evidence, because smooth fields share edges by chance more often than
 * textbook p-values say (Clifford, Richardson & Hémon 1989). In: fields on one plane. Out: correlation and its excess.
 */

import { averageRanks, correlation } from './agreement.ts';
import { surrogateFields, surrogateModel } from './covarianceSurrogates.ts';
import type { MaskedPlane } from './covariance.ts';
import type { Random } from './random.ts';
import { gradientSquares, maskedSmoother } from './verdictCalmCells.ts';

const EDGE_SMOOTHING_M = 4;
/** Random fields in place of the evidence. */
const REFERENCES = 16;

export interface EdgeCoincidence {
  readonly correlation: number;
  /** Correlation minus its mean over the random fields, and the same in their standard deviations. */
  readonly excess: number;
  readonly deviations: number;
}

export interface EdgePlane {
  readonly plane: MaskedPlane;
  readonly cellSizeM: number;
}

/**
 * Compares the evidence, whose layers' edges are added up, with one context layer after the other. A context layer is one
 * column of numbers, or one column a class. Columns are standardised and 0 outside the mask.
 */
export function edgeComparison({ plane, cellSizeM }: EdgePlane, evidence: readonly Float64Array[], random: Random): (context: readonly Float64Array[]) => EdgeCoincidence {
  const ranksOf = edgeRanks(plane, cellSizeM);
  const evidenceRanks = ranksOf(evidence);
  const references = likeLayers(plane, evidence, random).map(ranksOf);
  return (context) => {
    const contextRanks = ranksOf(context);
    const own = correlation(evidenceRanks, contextRanks);
    const byChance = references.map((ranks) => correlation(ranks, contextRanks));
    const mean = byChance.reduce((sum, value) => sum + value, 0) / byChance.length;
    const sd = Math.sqrt(byChance.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (byChance.length - 1));
    return { correlation: own, excess: own - mean, deviations: (own - mean) / sd };
  };
}

/** Ranks of the edge strength of the cells at least the smoothing width inside the mask. */
function edgeRanks(plane: MaskedPlane, cellSizeM: number): (layers: readonly Float64Array[]) => Float64Array {
  const smoother = maskedSmoother(plane, EDGE_SMOOTHING_M / cellSizeM);
  const interior = interiorCells(plane, Math.max(1, Math.round(EDGE_SMOOTHING_M / cellSizeM)));
  return (layers) => {
    const squares = new Float64Array(interior.length);
    for (const layer of layers) {
      const slopes = gradientSquares(plane, smoother(layer));
      for (let i = 0; i < interior.length; i++) squares[i] = squares[i]! + slopes[interior[i]!]!;
    }
    return averageRanks(squares);
  };
}

/** Cells from which `depth` steps to the sides stay in the mask. */
export function interiorCells({ width, height, mask }: MaskedPlane, depth: number): Uint32Array {
  let inside = Uint8Array.from(mask);
  for (let step = 0; step < depth; step++) {
    const previous = inside;
    inside = previous.map((value, cell) => {
      const col = cell % width;
      const isOnEdge = col === 0 || col === width - 1 || cell < width || cell >= width * (height - 1);
      return value === 1 && !isOnEdge && previous[cell - 1]! + previous[cell + 1]! + previous[cell - width]! + previous[cell + width]! === 4 ? 1 : 0;
    });
  }
  return Uint32Array.from(inside.keys()).filter((cell) => inside[cell] === 1);
}

/** Random fields with the layers' covariances and, by rank, each layer's own values: a map's steps stay steps. */
function likeLayers(plane: MaskedPlane, layers: readonly Float64Array[], random: Random): Float64Array[][] {
  const cells = Uint32Array.from(plane.mask.keys()).filter((cell) => plane.mask[cell] === 1);
  const sorted = layers.map((layer) => Float64Array.from(cells, (cell) => layer[cell]!).sort());
  return [...surrogateFields(surrogateModel(plane, layers), REFERENCES, random)].map((fields) => fields.map((field, l) => withValues(cells, field, sorted[l]!)));
}

function withValues(cells: Uint32Array, field: Float64Array, sorted: Float64Array): Float64Array {
  const order = cells.slice().sort((a, b) => field[a]! - field[b]!);
  const out = new Float64Array(field.length);
  order.forEach((cell, rank) => (out[cell] = sorted[rank]!));
  return out;
}
