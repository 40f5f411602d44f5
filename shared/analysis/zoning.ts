/**
 * The zoning of one block, one line a stage: layers on the grid → smoothed and standardised → weights → k-means for one to six
 * zones → clean-up; beside them edges of context layers → verdict and what speaks for each number; then number → polygons →
 * statistics → test on fruit. The work beside needs small planes only, so that another thread may do it meanwhile.
 * In: grid, layers, options, readings. Out: a record with every candidate, so that a person may choose another; the same
 * input gives the same bytes, whoever does which part. Cost on 250 000 cells with two layers: about a second.
 */

import { polygonsArea } from '../geo/rings.ts';
import { adviseLayers, compareEdges, edgeTask, layersToCompare, type EdgeTask, type LayerAdvice } from './layerAdvice.ts';
import type { EdgeCoincidence } from './layerAdviceEdges.ts';
import { membershipBands, type MembershipBands } from './zoneMemberships.ts';
import { cleanZones } from './zoningClean.ts';
import { evidenceTask, structuresOf, weighEvidence, type EvidenceTask, type ZoningEvidence } from './zoningEvidence.ts';
import { featureTable, fitZones, streamOf, zonesOnGrid, type CellZones, type FeatureTable } from './zoningFit.ts';
import { checkedOptions } from './zoningOptions.ts';
import { decideWeights, prepareLayers, weightedColumns, type PreparedLayers } from './zoningPrepare.ts';
import { rateFits, type FitQuality } from './zoningQuality.ts';
import { decideZones, drawZones, figuresOfZones, zoningRecord } from './zoningFinish.ts';
import { stackBlocks, type StackedBlocks } from './zoningTogether.ts';
import type { StageMark, ZoningInput, ZoningOptions, ZoningResult } from './zoningTypes.ts';

const ADVICE_STREAM = 40;

/** Throws AnalysisError for input that cannot be zoned. */
export function makeZoning(input: ZoningInput, mark: StageMark = () => {}): ZoningResult {
  const ground = prepareZoning(input);
  mark('prepare', 0.1);
  const edges = compareZoningEdges(ground.beside);
  mark('layer advice', 0.2);
  const evidence = weighEvidence(ground.beside.evidence);
  mark('evidence', 0.5);
  const parts = { made: zonesOfEveryNumber(ground, mark), edges, evidence };
  const decided = decideZones(ground, parts);
  const drawn = drawZones(decided.toDraw);
  mark('polygons', 0.95);
  const figures = figuresOfZones(ground, decided, mark);
  return zoningRecord(ground, parts, { decided, drawn, figures });
}

/** What can be done beside the zones themselves: plain data of some thousand cells. */
export interface WorkBeside {
  readonly seed: number;
  readonly edges: EdgeTask | null;
  readonly evidence: EvidenceTask;
}

export interface ZoningGround {
  readonly input: ZoningInput;
  readonly options: ZoningOptions;
  readonly stacked: StackedBlocks;
  readonly prepared: PreparedLayers;
  readonly advised: readonly LayerAdvice[];
  readonly weights: readonly number[];
  readonly beside: WorkBeside;
}

/** Checks everything; throws AnalysisError for input that cannot be zoned. */
export function prepareZoning(input: ZoningInput): ZoningGround {
  const options = checkedOptions(input);
  const stacked = stackBlocks(input, input.together ?? []);
  const { grid } = stacked;
  const prepared = prepareLayers(grid, stacked.layers, options);
  const { layers } = prepared;
  const advisable = layers.map((layer) => ({ ...layer, cells: layer.smoothed }));
  const areaM2 = polygonsArea(grid.outlineXY);
  const advised = adviseLayers(advisable, structuresOf(grid, layersToCompare(advisable), areaM2));
  const weights = decideWeights(layers, advised);
  // Who gives such a layer a weight of their own wants it heard.
  const scattered = new Set(layers.filter(({ weight }, l) => weight === null && advised[l]!.code === 'scattered').map(({ id }) => id));
  const evidence = evidenceTask({ grid, layers, weights, areaM2, seed: options.seed, scattered });
  return { input, options, stacked, prepared, advised, weights, beside: { seed: options.seed, edges: edgeTask(grid, advisable), evidence } };
}

export function compareZoningEdges({ seed, edges }: WorkBeside): Map<string, EdgeCoincidence> {
  return compareEdges(edges, streamOf(seed, ADVICE_STREAM));
}

export interface ZonesOfEveryNumber {
  readonly table: FeatureTable;
  readonly quality: readonly FitQuality[];
  /** Cleaned zones of all blocks for k = 1…6. */
  readonly cleaned: readonly CellZones[];
  /** Of each of them, where they were asked for. */
  readonly memberships: readonly (MembershipBands | null)[];
}

export function zonesOfEveryNumber({ options, stacked: { grid }, prepared: { layers }, weights }: ZoningGround, mark: StageMark = () => {}): ZonesOfEveryNumber {
  const table = featureTable(grid, weightedColumns(grid, layers, weights), options.principalComponents);
  const fits = fitZones(table, options.seed);
  mark('clusters', 0.7);
  const quality = rateFits(table, fits, options.seed);
  mark('quality', 0.8);
  const cleaned = fits.map((fit) => cleanZones(grid, zonesOnGrid(grid, table, fit), { smallestPatchHa: options.smallestPatchHa, narrowestM: options.narrowestM, orderBy: layers[weights.findIndex((weight) => weight > 0)]!.cells }));
  const memberships = fits.map((fit, i) => (options.memberships ? membershipBands(table, fit, { fitted: cleaned[i]!.fitted, cellCount: grid.inside.length }) : null));
  mark('clean-up', 0.85);
  return { table, quality, cleaned, memberships };
}

export interface ZoningParts {
  readonly made: ZonesOfEveryNumber;
  readonly edges: ReadonlyMap<string, EdgeCoincidence>;
  readonly evidence: ZoningEvidence;
}
