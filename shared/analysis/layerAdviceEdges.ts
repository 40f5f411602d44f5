/**
 * Do the edges of a soil map or terrain layer lie where the measured layers change? Boundary overlap (Fortin, Drapeau &
 * Jacquez 1996; Jacquez et al. 2000, from memory): rank correlation of the two edge strengths, against what it is between
 * each layer and random fields that vary like the other one, because smooth fields share edges by chance more often than
 * textbook p-values say (Clifford, Richardson & Hémon 1989). In: fields on one plane. Out: correlation and its excess.
 */

import { rankCorrelation } from './agreement.ts';
import { surrogateFields, surrogateModel } from './covarianceSurrogates.ts';
import type { MaskedPlane } from './covariance.ts';
import type { Random } from './random.ts';
import { gradientSquares, maskedSmoother } from './verdictCalmCells.ts';

const EDGE_SMOOTHING_M = 4;
/** Random fields for each of the two sides. */
const REFERENCES = 20;

export interface EdgeCoincidence {
  readonly correlation: number;
  /** Correlation minus its mean over the random fields, and the same in their standard deviations. */
  readonly excess: number;
  readonly deviations: number;
}

export interface EdgeInput {
  readonly plane: MaskedPlane;
  readonly cellSizeM: number;
  /** Evidence layers together: their edges are added up. */
  readonly evidence: readonly Float64Array[];
  /** One column for a layer of numbers, one a class for a map of classes. */
  readonly context: readonly Float64Array[];
}

/** Measures the coincidence of edges; layers are standardised and 0 outside the mask. */
export function edgeCoincidence({ plane, cellSizeM, evidence, context }: EdgeInput, random: Random): EdgeCoincidence {
  const edges = edgeMeter(plane, cellSizeM);
  const evidenceEdges = edges(evidence);
  const contextEdges = edges(context);
  const references: number[] = [];
  // Random fields cannot stand in for a map of classes; there the evidence's own random fields are the comparison.
  for (const [field] of context.length > 1 ? [] : surrogateFields(surrogateModel(plane, context), REFERENCES, random)) {
    references.push(rankCorrelation(evidenceEdges, edges([withMarginalOf(plane, field!, context[0]!)])));
  }
  for (const fields of surrogateFields(surrogateModel(plane, evidence), REFERENCES, random)) {
    references.push(rankCorrelation(edges(fields.map((field, l) => withMarginalOf(plane, field, evidence[l]!))), contextEdges));
  }
  const correlation = rankCorrelation(evidenceEdges, contextEdges);
  const mean = references.reduce((sum, value) => sum + value, 0) / references.length;
  const sd = Math.sqrt(references.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (references.length - 1));
  return { correlation, excess: correlation - mean, deviations: (correlation - mean) / sd };
}

/** Edge strength of the cells at least the smoothing width inside the mask: root of the summed squared slopes. */
function edgeMeter(plane: MaskedPlane, cellSizeM: number): (layers: readonly Float64Array[]) => Float64Array {
  const smoother = maskedSmoother(plane, EDGE_SMOOTHING_M / cellSizeM);
  const interior = interiorCells(plane, Math.max(1, Math.round(EDGE_SMOOTHING_M / cellSizeM)));
  return (layers) => {
    const squares = new Float64Array(interior.length);
    for (const layer of layers) {
      const slopes = gradientSquares(plane, smoother(layer));
      for (let i = 0; i < interior.length; i++) squares[i] = squares[i]! + slopes[interior[i]!]!;
    }
    return squares.map(Math.sqrt);
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

/** The field's ranks with the layer's values: as many cells at each value, so that a map's steps stay steps. */
function withMarginalOf({ mask }: MaskedPlane, field: Float64Array, layer: Float64Array): Float64Array {
  const cells = Uint32Array.from(mask.keys()).filter((cell) => mask[cell] === 1);
  const order = cells.slice().sort((a, b) => field[a]! - field[b]!);
  const values = Float64Array.from(cells, (cell) => layer[cell]!).sort();
  const out = new Float64Array(mask.length);
  order.forEach((cell, rank) => (out[cell] = values[rank]!));
  return out;
}
