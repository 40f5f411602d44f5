/**
 * Which layers count? Layers measured on the vines or in the soil of this block count the same; two that repeat each other
 * share one voice; of three and more, one that does not resemble itself at the width of a patch has only a small voice, as spatial
 * principal components weigh variables by their autocorrelation before management zones are made (Dray, Saïd & Débias 2008; Córdoba
 * et al. 2013, both from memory); terrain and soil maps stay out by default, because their structure says nothing about the vines and lets
 * lines in that the vines do not show. A context layer whose edges coincide with the evidence is offered, never added.
 * In: layers on the grid. Out: one weight a layer with the reason as a code and figures. Weights need no comparison of edges,
 * which is work of its own on a small plane, so that it may be done elsewhere and added afterwards.
 */

import type { Cells, Grid } from './grid.ts';
import { edgeComparison, type EdgeCoincidence } from './layerAdviceEdges.ts';
import { correlationOfCells } from './layerPairs.ts';
import { quantileOfSorted } from './quantile.ts';
import type { Random } from './random.ts';
import { commonCells, evidenceField, type EvidenceField } from './verdictField.ts';

export type LayerAdviceCode = 'evidence' | 'repeats' | 'scattered' | 'context-off' | 'context-offered' | 'only-context';

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
export const REPEATS_ABOVE = 0.9;
/**
 * Of two measured layers neither is doubted: nobody tells which is right, and on simulated blocks leaving one out costs more than
 * it saves. With a third, noise among clear layers is told apart.
 */
const LEAST_TO_COMPARE = 3;
/** Correlation with itself at one patch width below which a layer counts as scattered, and what another must have for that. */
const SCATTERED_BELOW = 0.12;
const CLEAR_ABOVE = 0.25;
const LEAST_VOICE = 0.05;
const LEAST_DEVIATIONS = 3;
const LEAST_EXCESS = 0.15;
/** Edges are compared on a coarse plane; the comparison is one of many small transforms. */
const MOST_EDGE_CELLS = 1000;
const RARE_SHARE = 0.02;
const LEAST_COVERED = 0.9;
const SPREAD_CELLS = 5000;
/** A prime, so that the steps do not fall on one column. */
const FAR_STEP = 7919;

/**
 * Weights with their reasons; what the edges of context layers say is added by `withEdges`. `structures`: by layer, how much it
 * resembles itself at one patch width; empty where layers are not compared by it.
 */
export function adviseLayers(layers: readonly AdvisableLayer[], structures: ReadonlyMap<string, number> = new Map()): LayerAdvice[] {
  const evidence = layers.filter(isEvidence);
  if (evidence.length === 0) return layers.map(({ id }) => advice(id, 1, 'only-context'));
  const clearest = Math.max(...structures.values());
  return layers.map((layer) => {
    if (!evidence.includes(layer)) return advice(layer.id, 0, 'context-off');
    const structure = structures.get(layer.id);
    const isScattered = structure !== undefined && structure < SCATTERED_BELOW && clearest >= CLEAR_ABOVE;
    if (isScattered) return advice(layer.id, Math.max(structure, LEAST_VOICE) / clearest, 'scattered', { figures: { structure, clearest } });
    return adviseEvidence(layer, evidence);
  });
}

/** The measured layers to compare by their structure: those that may vote, if there are enough of them. */
export function layersToCompare<Layer extends AdvisableLayer & { readonly weight: number | null }>(layers: readonly Layer[]): Layer[] {
  const voting = layers.filter((layer) => isEvidence(layer) && layer.weight !== 0);
  return voting.length >= LEAST_TO_COMPARE ? voting : [];
}

function isEvidence({ role, kind }: AdvisableLayer): boolean {
  return role === 'evidence' && kind === 'number';
}

function advice(id: string, weight: number, code: LayerAdviceCode, rest: { about?: string; figures?: Record<string, number> } = {}): LayerAdvice {
  return { id, weight, code, about: rest.about ?? null, figures: rest.figures ?? {} };
}

/**
 * What advised weights are multiplied by to stand beside those that were given. Zones follow from what weights are to each other, so three layers at
 * 1 each are as advised where each should have a third.
 */
export function scaleOfAdvice(layers: readonly { readonly weight: number; readonly advised: number | null }[]): number {
  const told = layers.filter(({ advised }) => advised !== null);
  const [given, wanted] = [told.reduce((sum, { weight }) => sum + weight, 0), told.reduce((sum, { advised }) => sum + advised!, 0)];
  return given > 0 && wanted > 0 ? given / wanted : 1;
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

/** The advice with what was found of the edges of context layers; a layer that could not be compared keeps no figures. */
export function withEdges(advised: readonly LayerAdvice[], coincidences: ReadonlyMap<string, EdgeCoincidence>): LayerAdvice[] {
  return advised.map((own) => {
    const found = coincidences.get(own.id);
    if (found === undefined) return own;
    const { correlation: edges, excess, deviations } = found;
    const isOffered = deviations >= LEAST_DEVIATIONS && excess >= LEAST_EXCESS;
    return advice(own.id, 0, isOffered ? 'context-offered' : 'context-off', { figures: { correlation: edges, excess, deviations } });
  });
}

/** All layers to compare on one small plane: the evidence first, then each context layer's columns. Plain data. */
export interface EdgeTask {
  readonly field: EvidenceField;
  readonly evidenceCount: number;
  readonly context: readonly { readonly id: string; readonly columns: number }[];
}

/** Context layers that differ within the block and cover nearly all of what the evidence covers; null when there is none. */
export function edgeTask(grid: Grid, layers: readonly AdvisableLayer[]): EdgeTask | null {
  const evidence = layers.filter(isEvidence);
  if (evidence.length === 0) return null;
  const isMeasured = commonCells(grid, evidence.map(({ cells }) => cells));
  const covered = (layer: AdvisableLayer) => {
    let both = 0;
    let measured = 0;
    for (let cell = 0; cell < isMeasured.length; cell++) {
      if (isMeasured[cell] === 0) continue;
      measured++;
      if (!Number.isNaN(layer.cells[cell]!)) both++;
    }
    return measured > 0 && both / measured >= LEAST_COVERED;
  };
  const others = layers.filter((layer) => !isEvidence(layer) && covered(layer));
  const compared = others.map((layer) => ({ id: layer.id, columns: columnsOf(layer) })).filter(({ columns }) => columns.length > 0);
  if (compared.length === 0) return null;
  const field = evidenceField(grid, [...evidence.map(({ cells }) => cells), ...compared.flatMap(({ columns }) => columns)], { mostCells: MOST_EDGE_CELLS });
  return { field, evidenceCount: evidence.length, context: compared.map(({ id, columns }) => ({ id, columns: columns.length })) };
}

/** What each context layer's edges share with the evidence, by id. */
export function compareEdges(task: EdgeTask | null, random: Random): Map<string, EdgeCoincidence> {
  if (task === null) return new Map();
  const { field, evidenceCount, context } = task;
  const compare = edgeComparison({ plane: field, cellSizeM: field.cellSizeM }, field.layers.slice(0, evidenceCount), random);
  let next = evidenceCount;
  return new Map(context.map(({ id, columns }) => [id, compare(field.layers.slice(next, (next += columns)))]));
}

/** A class is a column of its own, 1 where the class lies, unless it is too rare to have edges worth comparing. */
function columnsOf({ kind, cells }: AdvisableLayer): Cells[] {
  if (kind === 'number') return hasSpread(cells) ? [cells] : [];
  const counts = new Map<number, number>();
  for (const code of cells) if (!Number.isNaN(code)) counts.set(code, (counts.get(code) ?? 0) + 1);
  const total = [...counts.values()].reduce((sum, count) => sum + count, 0);
  const common = [...counts].filter(([, count]) => count > RARE_SHARE * total && count < total).map(([code]) => code);
  return common.map((code) => cells.map((value) => (Number.isNaN(value) ? NaN : Number(value === code))));
}

/** More than the clipped ends must differ, or nothing is left to standardise; judged on some thousand cells far apart. */
function hasSpread(cells: Cells): boolean {
  const values: number[] = [];
  for (let i = 0; i < Math.min(cells.length, SPREAD_CELLS); i++) {
    const value = cells[(i * FAR_STEP) % cells.length]!;
    if (!Number.isNaN(value)) values.push(value);
  }
  values.sort((a, b) => a - b);
  return values.length > 0 && quantileOfSorted(values, 0.01) < quantileOfSorted(values, 0.99);
}
