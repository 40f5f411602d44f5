/**
 * Which layers count? Layers measured on the vines or in the soil of this block count the same; two that repeat each other
 * share one voice; terrain and soil maps stay out by default, because their structure says nothing about the vines and lets
 * lines in that the vines do not show. A context layer whose edges coincide with the evidence is offered, never added.
 * In: layers on the grid. Out: one weight a layer with the reason as a code and figures.
 */

import { AnalysisError } from './analysisError.ts';
import { correlation } from './agreement.ts';
import type { Cells, Grid } from './grid.ts';
import { edgeCoincidence, type EdgeCoincidence } from './layerAdviceEdges.ts';
import type { Random } from './random.ts';
import { evidenceField } from './verdictField.ts';

export type LayerAdviceCode = 'evidence' | 'repeats' | 'context-off' | 'context-offered' | 'only-context';

export interface LayerAdvice {
  readonly id: string;
  readonly weight: number;
  readonly code: LayerAdviceCode;
  /** The other layer that this one repeats, or null. */
  readonly about: string | null;
  readonly figures: Readonly<Record<string, number>>;
}

export interface AdvisableLayer {
  readonly id: string;
  readonly role: 'evidence' | 'context';
  readonly kind: 'number' | 'class';
  readonly cells: Cells;
}

/** Above this two layers say the same; common practice in soil zoning. */
const REPEATS_ABOVE = 0.9;
const LEAST_DEVIATIONS = 3;
const LEAST_EXCESS = 0.15;
/** Edges are compared on a coarse plane; the comparison is one of many small transforms. */
const MOST_EDGE_CELLS = 1500;
const RARE_SHARE = 0.02;

export function adviseLayers(grid: Grid, layers: readonly AdvisableLayer[], random: Random): LayerAdvice[] {
  const evidence = layers.filter(({ role, kind }) => role === 'evidence' && kind === 'number');
  return layers.map((layer) => {
    if (evidence.length === 0) return advice(layer.id, 1, 'only-context');
    return layer.role === 'evidence' ? adviseEvidence(layer, evidence) : adviseContext(grid, { layer, evidence }, random);
  });
}

function advice(id: string, weight: number, code: LayerAdviceCode, rest: { about?: string; figures?: Record<string, number> } = {}): LayerAdvice {
  return { id, weight, code, about: rest.about ?? null, figures: rest.figures ?? {} };
}

/** Layers that repeat each other share the weight of one. */
function adviseEvidence(layer: AdvisableLayer, evidence: readonly AdvisableLayer[]): LayerAdvice {
  const repeats = evidence
    .filter((other) => other !== layer)
    .map((other) => ({ other, r: correlationOfCells(layer.cells, other.cells) }))
    .filter(({ r }) => Math.abs(r) > REPEATS_ABOVE);
  if (repeats.length === 0) return advice(layer.id, 1, 'evidence');
  const [first] = repeats;
  return advice(layer.id, 1 / (repeats.length + 1), 'repeats', { about: first!.other.id, figures: { correlation: first!.r } });
}

/** Correlation over the cells that both layers have; 0 when one of them is constant there. */
export function correlationOfCells(first: Cells, second: Cells): number {
  const both = Uint32Array.from(first.keys()).filter((cell) => !Number.isNaN(first[cell]!) && !Number.isNaN(second[cell]!));
  const r = correlation(Float64Array.from(both, (cell) => first[cell]!), Float64Array.from(both, (cell) => second[cell]!));
  return Number.isNaN(r) ? 0 : r;
}

function adviseContext(grid: Grid, { layer, evidence }: { layer: AdvisableLayer; evidence: readonly AdvisableLayer[] }, random: Random): LayerAdvice {
  const coincidence = measuredCoincidence(grid, { layer, evidence }, random);
  if (coincidence === null) return advice(layer.id, 0, 'context-off');
  const { correlation: edges, excess, deviations } = coincidence;
  const isOffered = deviations >= LEAST_DEVIATIONS && excess >= LEAST_EXCESS;
  return advice(layer.id, 0, isOffered ? 'context-offered' : 'context-off', { figures: { correlation: edges, excess, deviations } });
}

/** Null when the layer cannot be compared: one value everywhere, or too few cells in common. */
function measuredCoincidence(grid: Grid, { layer, evidence }: { layer: AdvisableLayer; evidence: readonly AdvisableLayer[] }, random: Random): EdgeCoincidence | null {
  try {
    const field = evidenceField(grid, [...evidence.map(({ cells }) => cells), ...columnsOf(layer)], { mostCells: MOST_EDGE_CELLS });
    return edgeCoincidence({ plane: field, cellSizeM: field.cellSizeM, evidence: field.layers.slice(0, evidence.length), context: field.layers.slice(evidence.length) }, random);
  } catch (error) {
    if (error instanceof AnalysisError) return null;
    throw error;
  }
}

/** A class is a column of its own, 1 where the class lies, unless it is too rare to have edges worth comparing. */
function columnsOf({ kind, cells }: AdvisableLayer): Cells[] {
  if (kind === 'number') return [cells];
  const counts = new Map<number, number>();
  for (const code of cells) if (!Number.isNaN(code)) counts.set(code, (counts.get(code) ?? 0) + 1);
  const total = [...counts.values()].reduce((sum, count) => sum + count, 0);
  const common = [...counts].filter(([, count]) => count > RARE_SHARE * total && count < total).map(([code]) => code);
  return common.map((code) => cells.map((value) => (Number.isNaN(value) ? NaN : Number(value === code))));
}
