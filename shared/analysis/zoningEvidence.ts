/**
 * The evidence stage of a zoning: the verdict and what speaks for each number of zones, from the evidence layers alone, on two
 * planes coarse enough to be quick. In: prepared layers with their weights. Out: verdict and curve over k.
 */

import type { Grid } from './grid.ts';
import { judge, type VerdictResult } from './verdict.ts';
import { evidenceField, type EvidenceField } from './verdictField.ts';
import { gapCurve, type GapAtK } from './verdictGap.ts';
import { layerStructures, patchWidthM } from './verdictStructure.ts';
import { streamOf } from './zoningFit.ts';
import type { PreparedLayer } from './zoningPrepare.ts';

/** Coarser cells than this lose no zones that could be worked, and a transform costs by the cell. */
const MOST_GAP_CELLS = 2500;
/** Structure at one patch width is measured with at least so many cells to the patch. */
const CELLS_PER_PATCH = 4;
const EVIDENCE_STREAM = 20;

export interface ZoningEvidence {
  readonly verdict: VerdictResult;
  readonly curve: readonly GapAtK[];
  /** Layers that the curve was made from. */
  readonly layerCount: number;
}

export interface EvidenceInput {
  readonly grid: Grid;
  readonly layers: readonly PreparedLayer[];
  readonly weights: readonly number[];
  readonly areaM2: number;
  readonly seed: number;
}

/** Without a measured layer in use there is no verdict; the curve is then made from the layers that are used. */
export function weighEvidence({ grid, layers, weights, areaM2, seed }: EvidenceInput): ZoningEvidence {
  const used = layers.map((layer, l) => ({ layer, weight: weights[l]! })).filter(({ layer, weight }) => weight > 0 && layer.kind === 'number');
  const measured = used.filter(({ layer }) => layer.role === 'evidence');
  const voters = measured.length > 0 ? measured : used;
  if (voters.length === 0) return { verdict: judge({ areaM2, layerIds: [], structures: [], curve: [] }), curve: [], layerCount: 0 };
  const cells = voters.map(({ layer }) => layer.smoothed);
  const curve = gapCurve(weighted(evidenceField(grid, cells, { mostCells: MOST_GAP_CELLS }), voters.map(({ weight }) => weight)), { random: streamOf(seed, EVIDENCE_STREAM) });
  const structures = measured.length === 0 ? [] : layerStructures(evidenceField(grid, cells, { coarsestCellM: patchWidthM(areaM2) / CELLS_PER_PATCH }), areaM2);
  const verdict = judge({ areaM2, layerIds: measured.map(({ layer }) => layer.id), structures, curve });
  return { verdict, curve, layerCount: voters.length };
}

function weighted(field: EvidenceField, weights: readonly number[]): EvidenceField {
  return { ...field, layers: field.layers.map((layer, l) => layer.map((value) => value * Math.sqrt(weights[l]!))) };
}
