/**
 * The zoning of one block, one line a stage: layers on the grid → smoothed and standardised → weights → verdict and advised
 * number → k-means for one to six zones → clean-up → polygons → statistics → test on fruit.
 * In: grid, layers, options, readings. Out: a record with every candidate, so that a person may choose another; the same
 * input gives the same bytes. Cost on 250 000 cells with two layers: about a second.
 */

import { polygonsArea } from '../geo/rings.ts';
import { AnalysisError } from './analysisError.ts';
import { assertCellCount } from './grid.ts';
import { adviseLayers } from './layerAdvice.ts';
import { polygonise } from './polygonise.ts';
import { checkOnFruit, withFruit, type FruitCheck } from './verdictFruit.ts';
import { MOST_ZONES } from './verdictGap.ts';
import { adviseZoneCount } from './zoneCount.ts';
import { cleanZones } from './zoningClean.ts';
import { weighEvidence } from './zoningEvidence.ts';
import { featureTable, fitZones, streamOf, zonesOnGrid, type CellZones } from './zoningFit.ts';
import { decideWeights, prepareLayers, weightedColumns } from './zoningPrepare.ts';
import { rateFits } from './zoningQuality.ts';
import { candidateOf, evidenceRows, resultWarnings } from './zoningRecord.ts';
import { zoneCountOf } from './zoningStats.ts';
import { stackBlocks } from './zoningTogether.ts';
import type { StageMark, ZoningInput, ZoningOptions, ZoningReadings, ZoningResult } from './zoningTypes.ts';

/** Changes whenever the same input may give other zones. */
export const ENGINE_VERSION = '2';

export const defaultZoningOptions: ZoningOptions = {
  zones: 'advise',
  standardise: 'plain',
  smoothingM: 3,
  smallestPatchHa: 0.05,
  narrowestM: 0,
  principalComponents: false,
  seed: 1,
  drawAll: false,
};

const ADVICE_STREAM = 40;
const FRUIT_STREAM = 50;

/** Throws AnalysisError for input that cannot be zoned. */
export function makeZoning(input: ZoningInput, mark: StageMark = () => {}): ZoningResult {
  const options = checkedOptions(input);
  const { grid, layers: given, readings, ownPart } = stackBlocks(input, input.together ?? []);
  const areaM2 = polygonsArea(grid.outlineXY);
  const { layers, warnings } = prepareLayers(grid, given, options);
  mark('prepare', 0.1);
  const advisedWeights = adviseLayers(grid, layers.map((layer) => ({ ...layer, cells: layer.smoothed })), streamOf(options.seed, ADVICE_STREAM));
  const weights = decideWeights(layers, advisedWeights);
  mark('layer advice', 0.2);
  const evidence = weighEvidence({ grid, layers, weights, areaM2, seed: options.seed });
  mark('evidence', 0.5);
  const table = featureTable(grid, weightedColumns(grid, layers, weights), options.principalComponents);
  const fits = fitZones(table, options.seed);
  mark('clusters', 0.7);
  const quality = rateFits(table, fits, options.seed);
  mark('quality', 0.8);
  const cleaned = fits.map((fit) => cleanZones(grid, zonesOnGrid(grid, table, fit), { smallestPatchHa: options.smallestPatchHa, narrowestM: options.narrowestM, orderBy: layers[0]!.cells }));
  mark('clean-up', 0.85);
  const count = adviseZoneCount({ ...evidence, workable: workableNumbers(cleaned) });
  const advisedK = evidence.verdict.verdict === 'one' ? 1 : count.best;
  const chosenK = options.zones === 'advise' ? advisedK : options.zones;
  const own = cleaned.map(ownPart);
  const drawn = own.map(({ labels }, i) => (options.drawAll || i + 1 === chosenK ? polygonise(input.grid, labels) : null));
  mark('polygons', 0.95);
  const used = input.layers.filter(({ id }) => layers.some((layer) => layer.id === id));
  const candidates = own.map((zones, i) => candidateOf(i + 1, { grid: input.grid, layers: used, zones, drawn: drawn[i]! }));
  mark('statistics', 0.98);
  const fruit = fruitCheck(cleaned[(chosenK > 1 ? chosenK : count.best) - 1]!, readings, options.seed);
  mark('fruit', 1);
  return {
    engineVersion: ENGINE_VERSION,
    gridKey: input.grid.key,
    options,
    weights: layers.map(({ id }, l) => ({ layerId: id, weight: weights[l]! })),
    advisedWeights,
    verdict: withFruit(evidence.verdict, fruit),
    fruit,
    advisedK,
    bestSeveral: count.best,
    alsoOffer: count.alsoOffer,
    chosenK,
    evidence: evidenceRows(quality, { curve: evidence.curve, scores: count.scores }, candidates),
    candidates,
    componentShares: table.componentShares,
    warnings: [...warnings, ...resultWarnings({ chosen: candidates[chosenK - 1]!, advisedK, table })],
  };
}

/** Defaults filled in and every option checked; layers and readings are checked against the grid. */
function checkedOptions({ grid, layers, options = {}, readings = [], together = [] }: ZoningInput): ZoningOptions {
  const all = { ...defaultZoningOptions, ...options };
  if (all.zones !== 'advise' && !(Number.isInteger(all.zones) && all.zones >= 1 && all.zones <= MOST_ZONES)) {
    throw new AnalysisError('zones', `${all.zones} zones cannot be made; ask for advise or a whole number from 1 to ${MOST_ZONES}.`);
  }
  if (!(all.smoothingM >= 0 && all.smoothingM <= 50)) throw new AnalysisError('smoothing', `A smoothing of ${all.smoothingM} m cannot be used; give 0 to 50 m.`);
  if (!(all.smallestPatchHa >= 0)) throw new AnalysisError('smallest-patch', `A smallest patch of ${all.smallestPatchHa} ha cannot be used; give 0 or more.`);
  if (!(all.narrowestM >= 0 && all.narrowestM <= 200)) throw new AnalysisError('narrowest', `A narrowest part of ${all.narrowestM} m cannot be used; give 0 to 200 m.`);
  if (!Number.isInteger(all.seed)) throw new AnalysisError('seed', `The seed ${all.seed} cannot be used; give a whole number.`);
  if (layers.length === 0) throw new AnalysisError('no-layer', 'No layer was chosen; choose at least one.');
  const ids = new Set<string>();
  for (const layer of layers) {
    assertCellCount(grid, layer.cells, `Layer "${layer.id}"`);
    if (ids.has(layer.id)) throw new AnalysisError('layer-twice', `Layer "${layer.id}" was given twice; give each a name of its own.`);
    ids.add(layer.id);
  }
  for (const block of together) for (const layer of block.layers) assertCellCount(block.grid, layer.cells, `Layer "${layer.id}"`);
  for (const { measure, values } of readings) {
    if (values.some(({ value }) => !Number.isFinite(value))) throw new AnalysisError('reading', `A reading of "${measure}" is not a number; correct or remove it.`);
  }
  return all;
}

/** The readings with the zone each lies in; those outside the zones are left out. */
function fruitCheck({ labels }: CellZones, readings: readonly ZoningReadings[], seed: number): FruitCheck {
  const measures = readings.map(({ measure, values }) => ({
    measure,
    readings: values.flatMap(({ cell, row, value }) => ((labels[cell] ?? 0) > 0 ? [{ value, row, zone: labels[cell]! }] : [])),
  }));
  return checkOnFruit(measures, streamOf(seed, FRUIT_STREAM));
}

/** Numbers above one whose zones have all survived clean-up. */
function workableNumbers(cleaned: readonly CellZones[]): number[] {
  return cleaned.flatMap(({ labels }, i) => (i > 0 && zoneCountOf(labels) === i + 1 ? [i + 1] : []));
}
