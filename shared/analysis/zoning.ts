/**
 * The zoning of one block, one line a stage: layers on the grid → smoothed and standardised → weights → k-means for one to six
 * zones → clean-up; beside them edges of context layers → verdict and what speaks for each number; then number → polygons →
 * statistics → test on fruit. The work beside needs small planes only, so that another thread may do it meanwhile.
 * In: grid, layers, options, readings. Out: a record with every candidate, so that a person may choose another; the same
 * input gives the same bytes, whoever does which part. Cost on 250 000 cells with two layers: about a second.
 */

import { polygonsArea } from '../geo/rings.ts';
import { groupBy } from '../groupBy.ts';
import { adviseLayers, compareEdges, edgeTask, layersToCompare, withEdges, type EdgeTask, type LayerAdvice } from './layerAdvice.ts';
import type { EdgeCoincidence } from './layerAdviceEdges.ts';
import { layerPairs } from './layerPairs.ts';
import type { Grid } from './grid.ts';
import { cellsPerLabel } from './labels.ts';
import { allReachWidth } from './labelsWidth.ts';
import { polygonise } from './polygonise.ts';
import { standOutGround } from './standOutGround.ts';
import { withStandOut, zonesThatShow } from './verdictStandOut.ts';
import { checkOnFruit, withFruit, type FruitCheck } from './verdictFruit.ts';
import { CUT_PENALTY, snapToRows } from './snapToRows.ts';
import { adviseZoneCount } from './zoneCount.ts';
import { membershipBands, NO_MEMBERSHIP, type MembershipBands } from './zoneMemberships.ts';
import { cleanZones } from './zoningClean.ts';
import { evidenceTask, structuresOf, weighEvidence, type EvidenceTask, type ZoningEvidence } from './zoningEvidence.ts';
import { featureTable, fitZones, streamOf, zonesOnGrid, type CellZones, type FeatureTable } from './zoningFit.ts';
import { checkedOptions } from './zoningOptions.ts';
import { decideWeights, prepareLayers, weightedColumns, type PreparedLayers } from './zoningPrepare.ts';
import { rateFits, type FitQuality } from './zoningQuality.ts';
import { candidateOf, evidenceRows, resultWarnings } from './zoningRecord.ts';
import { zoneCountOf } from './zoningStats.ts';
import { stackBlocks, type BlockPart, type StackedBlocks } from './zoningTogether.ts';
import type { BlockInput, StageMark, ZoningInput, ZoningOptions, ZoningResult } from './zoningTypes.ts';

/** Changes whenever the same input may give other zones. */
export const ENGINE_VERSION = '14';

const ADVICE_STREAM = 40;
const FRUIT_STREAM = 50;

/** Throws AnalysisError for input that cannot be zoned. */
export function makeZoning(input: ZoningInput, mark: StageMark = () => {}): ZoningResult {
  const ground = prepareZoning(input);
  mark('prepare', 0.1);
  const edges = compareZoningEdges(ground.beside);
  mark('layer advice', 0.2);
  const evidence = weighEvidence(ground.beside.evidence);
  mark('evidence', 0.5);
  return finishZoning(ground, { made: zonesOfEveryNumber(ground, mark), edges, evidence }, mark);
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

/** Number of zones, polygons and figures from what was made and found. */
export function finishZoning(ground: ZoningGround, { made: { table, quality, cleaned, memberships }, edges, evidence }: ZoningParts, mark: StageMark = () => {}): ZoningResult {
  const { input, options, stacked, prepared: { layers, warnings }, weights } = ground;
  const followed = cleaned.map((zones) => alongRows(stacked.own, zones, options.borders));
  const own = followed.map(({ zones }) => zones);
  // A zone that one of several blocks lacks is no less a zone.
  const workable = workableNumbers(input.together?.length ? { zones: cleaned, grid: stacked.grid } : { zones: own, grid: input.grid }, options.smoothingM);
  const { verdict, count } = withStandOut(evidence.verdict, {
    ground: evidence.standingOut,
    count: adviseZoneCount({ ...evidence, stability: new Map(quality.map((row) => [row.k, row.stability])), workable }),
    shownBy: (ground) => zonesThatShow(ground, stacked.grid, workable.map((k) => ({ k, labels: cleaned[k - 1]!.labels }))),
  });
  const isApart = verdict.reasons.some(({ code }) => code === 'stands-out-apart');
  // Zones that clean-up joins to one are none, whatever the layers show: the number advised is one that can be had.
  const isWorkable = workable.length > 0;
  const advisedK = verdict.verdict === 'one' || isApart || !isWorkable ? 1 : count.best;
  const chosenK = options.zones === 'advise' ? advisedK : options.zones;
  const drawn = own.map(({ labels }, i) => (options.drawAll || i + 1 === chosenK ? polygonise(input.grid, labels) : null));
  mark('polygons', 0.95);
  const used = input.layers.filter(({ id }) => layers.some((layer) => layer.id === id));
  const candidates = own.map((zones, i) => candidateOf(i + 1, { grid: input.grid, layers: used, zones, drawn: drawn[i]!, memberships: memberships[i]?.map((band) => stacked.own.planeOf(band, NO_MEMBERSHIP)) ?? null }));
  mark('statistics', 0.98);
  // The zones as drawn in every block, along the rows where that was asked for.
  const tested = (chosenK > 1 ? chosenK : count.best) - 1;
  const fruit = fruitCheck(stacked.parts.map((part) => ({ block: part.block, zones: part === stacked.own ? own[tested]! : alongRows(part, cleaned[tested]!, options.borders).zones })), options.seed);
  mark('fruit', 1);
  return {
    engineVersion: ENGINE_VERSION,
    gridKey: input.grid.key,
    cellSizeM: stacked.grid.cellSizeM,
    options,
    weights: layers.map(({ id }, l) => ({ layerId: id, weight: weights[l]! })),
    advisedWeights: withEdges(ground.advised, edges),
    layerPairs: layerPairs(layers),
    verdict: withFruit(verdict, fruit),
    standsOut: isApart && evidence.standingOut ? standOutGround(evidence.standingOut, { whole: cleaned[0]!, stacked }) : null,
    fruit,
    advisedK,
    bestSeveral: count.best,
    alsoOffer: count.alsoOffer,
    chosenK,
    evidence: evidenceRows(quality, { curve: evidence.curve, scores: count.scores }, candidates),
    candidates,
    componentShares: table.componentShares,
    warnings: [...warnings, ...resultWarnings({ chosen: candidates[chosenK - 1]!, leftInAll: cellsPerLabel(cleaned[chosenK - 1]!.labels).reduce((count, cells, zone) => count + Number(zone > 0 && cells > 0), 0), advisedK, noneWorkable: !isWorkable && verdict.verdict !== 'one', table, againstGround: followed[chosenK - 1]!.againstGround })],
  };
}

/** A block's zones with their borders along its rows, if that was asked for, and the share of vines that this puts elsewhere; doubts stay where they are. */
function alongRows({ block: { grid, planting }, zonesOf }: BlockPart, ofAll: CellZones, borders: ZoningOptions['borders']): { zones: CellZones; againstGround: number | null } {
  const zones = zonesOf(ofAll);
  if (borders === 'free' || !planting) return { zones, againstGround: null };
  const { cellLabels, wrongVines } = snapToRows({ grid, labels: zones.labels, ...planting }, { mode: borders, cutPenalty: CUT_PENALTY });
  return { zones: { ...zones, labels: cellLabels }, againstGround: wrongVines / planting.vines.count };
}

/** The readings of all blocks, with the zone that each lies in; those outside the zones are left out. */
function fruitCheck(blocks: readonly { readonly block: BlockInput; readonly zones: CellZones }[], seed: number): FruitCheck {
  const zoned = blocks.flatMap(({ block: { readings = [] }, zones: { labels } }) =>
    readings.map(({ measure, values }) => ({ measure, readings: values.flatMap(({ cell, row, value }) => ((labels[cell] ?? 0) > 0 ? [{ value, row, zone: labels[cell]! }] : [])) })),
  );
  const measures = [...groupBy(zoned, ({ measure }) => measure)].map(([measure, parts]) => ({ measure, readings: parts.flatMap(({ readings }) => readings) }));
  // Whichever block asks: its own order would draw other random numbers.
  return checkOnFruit(blocks.length > 1 ? measures.sort((a, b) => (a.measure < b.measure ? -1 : 1)) : measures, streamOf(seed, FRUIT_STREAM));
}

/**
 * Numbers above one whose zones have all survived clean-up and are somewhere wider than smoothing makes a sharp border. Narrower
 * ones are the border itself: between two plateaus smoothing leaves a fringe of values that are neither's, and with little noise
 * clusters of the fringe score high.
 */
function workableNumbers({ zones, grid }: { zones: readonly CellZones[]; grid: Grid }, smoothingM: number): number[] {
  const fringe = { widthM: 2 * smoothingM + grid.cellSizeM, cellSizeM: grid.cellSizeM };
  return zones.flatMap(({ labels }, i) => (i > 0 && zoneCountOf(labels) === i + 1 && allReachWidth(labels, grid.cols, fringe) ? [i + 1] : []));
}
