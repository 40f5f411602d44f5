/**
 * The evidence stage of a zoning: the verdict and what speaks for each number of zones, from the evidence layers alone, on two
 * planes coarse enough to be quick. In: prepared layers with their weights. Out: verdict and curve over k. The planes are laid
 * first and weighed afterwards: they are small and plain, so that another thread can weigh them meanwhile.
 */

import type { Cells, Grid } from './grid.ts';
import { judge, type VerdictResult } from './verdict.ts';
import { evidenceField, type EvidenceField } from './verdictField.ts';
import { gapRows, holdsOfEveryNumber, type GapAtK, type GapRow } from './verdictGap.ts';
import { groundThatStandsOut, type StandingOut } from './verdictStandOut.ts';
import { layerStructures, patchWidthM, type LayerStructure } from './verdictStructure.ts';
import { withoutWaves } from './verdictWaves.ts';
import { streamOf } from './zoningFit.ts';
import type { PreparedLayer } from './zoningPrepare.ts';

/** Coarser cells than this lose no zones that could be worked, and a transform costs by the cell. */
const MOST_GAP_CELLS = 2500;
/** Structure at one patch width is measured with at least so many cells to the patch. */
const CELLS_PER_PATCH = 4;
const EVIDENCE_STREAM = 20;
const HOLD_STREAM = 21;
const STAND_OUT_STREAM = 22;

export interface EvidenceInput {
  readonly grid: Grid;
  readonly layers: readonly PreparedLayer[];
  readonly weights: readonly number[];
  readonly areaM2: number;
  readonly seed: number;
  /** Ids of measured layers that look like noise: their gradients would hide the calm cells of the others. */
  readonly scattered?: ReadonlySet<string>;
}

/** The planes to weigh; null where there is nothing to compare with. */
export interface EvidenceTask {
  readonly areaM2: number;
  readonly seed: number;
  /** For the comparison with random fields, layers times √weight. */
  readonly gapField: EvidenceField | null;
  /** Its layers, in the same order. */
  readonly gapIds: readonly string[];
  /** For the question at one patch width; measured layers only. */
  readonly structureField: EvidenceField | null;
  readonly measuredIds: readonly string[];
}

export interface ZoningEvidence {
  readonly verdict: VerdictResult;
  readonly curve: readonly GapAtK[];
  /** Layers that the curve was made from. */
  readonly layerCount: number;
  /** Looked for only where nothing resembles itself at the width of a patch. */
  readonly standingOut: StandingOut | null;
}

/** Without a measured layer in use there will be no verdict; the curve is then made from the layers that are used. */
export function evidenceTask({ grid, layers, weights, areaM2, seed, scattered = new Set() }: EvidenceInput): EvidenceTask {
  const used = layers.map((layer, l) => ({ layer, weight: weights[l]! })).filter(({ layer, weight }) => weight > 0 && layer.kind === 'number');
  const measured = used.filter(({ layer }) => layer.role === 'evidence');
  const voters = measured.length > 0 ? measured : used;
  const clear = voters.filter(({ layer }) => !scattered.has(layer.id));
  const cellsOf = (some: typeof voters) => some.map(({ layer }) => layer.smoothed);
  return {
    areaM2,
    seed,
    gapField: clear.length === 0 ? null : weighted(evidenceField(grid, cellsOf(clear), { mostCells: MOST_GAP_CELLS }), clear.map(({ weight }) => weight)),
    gapIds: clear.map(({ layer }) => layer.id),
    structureField: measured.length === 0 ? null : evidenceField(grid, cellsOf(measured), { coarsestCellM: patchWidthM(areaM2) / CELLS_PER_PATCH }),
    measuredIds: measured.map(({ layer }) => layer.id),
  };
}

/** How much each layer resembles itself at one patch width, by id; nothing for fewer layers than can be compared. */
export function structuresOf(grid: Grid, layers: readonly { readonly id: string; readonly cells: Cells }[], areaM2: number): Map<string, number> {
  if (layers.length === 0) return new Map();
  const field = evidenceField(grid, layers.map(({ cells }) => cells), { coarsestCellM: patchWidthM(areaM2) / CELLS_PER_PATCH });
  return new Map(layerStructures(field, areaM2).map(({ structure }, l) => [layers[l]!.id, structure]));
}

/** What is weighed, in parts that know nothing of each other, so that two threads may share them. */
export interface EvidenceParts {
  readonly structures: readonly LayerStructure[];
  readonly gaps: readonly GapRow[];
  /** For each row of the gaps. */
  readonly holds: readonly number[];
}

export function structuresIn({ structureField, areaM2 }: EvidenceTask): LayerStructure[] {
  return structureField === null ? [] : layerStructures(structureField, areaM2);
}

export function gapsIn({ gapField, seed }: EvidenceTask): GapRow[] {
  return gapField === null ? [] : gapRows(gapField, { random: streamOf(seed, EVIDENCE_STREAM) });
}

export function holdsIn({ gapField, seed, areaM2 }: EvidenceTask): number[] {
  return gapField === null ? [] : holdsOfEveryNumber(gapField, { random: streamOf(seed, EVIDENCE_STREAM), hold: { patchM: patchWidthM(areaM2), random: streamOf(seed, HOLD_STREAM) } });
}

export function weighEvidence(task: EvidenceTask): ZoningEvidence {
  return concludeEvidence(task, { structures: structuresIn(task), gaps: gapsIn(task), holds: holdsIn(task) });
}

export function concludeEvidence(task: EvidenceTask, parts: EvidenceParts): ZoningEvidence {
  const { areaM2, seed, gapField, gapIds, measuredIds } = task;
  const { structures } = parts;
  const weigh = ({ gaps, holds }: Pick<EvidenceParts, 'gaps' | 'holds'>, field: EvidenceField | null, evenedIds: readonly string[] = []) => {
    const curve = gaps.map((row, i) => ({ ...row, holds: holds[i]! }));
    return { field, curve, verdict: judge({ areaM2, layerIds: measuredIds, structures, curve, evenedIds }) };
  };
  let weighed = weigh(parts, gapField);
  const isPlain = gapField !== null && structures.length > 0 && weighed.verdict.reasons.every(({ code }) => code !== 'structure');
  const evened = isPlain ? withoutWaves(gapField) : null;
  // Stripes have plateaus of their own; what is left of the layers is what may be zoned.
  if (evened) {
    const left = { ...task, gapField: evened.field };
    weighed = weigh({ gaps: gapsIn(left), holds: holdsIn(left) }, evened.field, gapIds.filter((_, l) => evened.evened[l]));
  }
  const { field, curve, verdict } = weighed;
  // At the block's edge, where cells are cut, something of the stripes stays and would stand out.
  const scanned = field && { ...field, layers: field.layers.filter((_, l) => !evened?.evened[l]) };
  const standingOut = isPlain && scanned ? groundThatStandsOut(scanned, streamOf(seed, STAND_OUT_STREAM)) : null;
  return { verdict, curve, layerCount: gapField?.layers.length ?? 0, standingOut };
}

function weighted(field: EvidenceField, weights: readonly number[]): EvidenceField {
  return { ...field, layers: field.layers.map((layer, l) => layer.map((value) => value * Math.sqrt(weights[l]!))) };
}
