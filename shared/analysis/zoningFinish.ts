/**
 * The end of a zoning: which number of zones, their polygons, what each is like, and the test on fruit, from what was made and
 * found. Polygons and figures know nothing of each other, so that another thread may draw meanwhile.
 */

import { groupBy } from '../groupBy.ts';
import { withEdges } from './layerAdvice.ts';
import { layerPairs } from './layerPairs.ts';
import type { Grid, Labels } from './grid.ts';
import { cellsPerLabel } from './labels.ts';
import { allReachWidth } from './labelsWidth.ts';
import { polygonise, type ZonePolygons } from './polygonise.ts';
import { standOutGround } from './standOutGround.ts';
import { withStandOut, zonesThatShow } from './verdictStandOut.ts';
import { checkOnFruit, withFruit, type FruitCheck } from './verdictFruit.ts';
import type { VerdictResult } from './verdict.ts';
import { CUT_PENALTY, snapToRows } from './snapToRows.ts';
import { adviseZoneCount, type ZoneCountAdvice } from './zoneCount.ts';
import { NO_MEMBERSHIP } from './zoneMemberships.ts';
import type { ZoningGround, ZoningParts } from './zoning.ts';
import { doubtWhereMoved } from './zoningClean.ts';
import { streamOf, type CellZones } from './zoningFit.ts';
import { candidateOf, evidenceRows, resultWarnings } from './zoningRecord.ts';
import { describeZones, zoneCountOf } from './zoningStats.ts';
import type { BlockPart } from './zoningTogether.ts';
import type { BlockInput, StageMark, Zone, ZoningOptions, ZoningResult } from './zoningTypes.ts';

/** Changes whenever the same input may give other zones. */
export const ENGINE_VERSION = '15';

const FRUIT_STREAM = 50;

export interface ZonesDecided {
  /** The block's own zones for k = 1…6, along its rows where that was asked for. */
  readonly followed: readonly ZonesAlongRows[];
  /** Of all blocks, as cleaned. */
  readonly cleaned: readonly CellZones[];
  readonly verdict: VerdictResult;
  readonly count: ZoneCountAdvice;
  readonly isApart: boolean;
  readonly isWorkable: boolean;
  readonly advisedK: number;
  readonly chosenK: number;
  readonly toDraw: ZonesToDraw;
}

/** Plain data, so that it can cross into another thread. */
export interface ZonesToDraw {
  readonly grid: Grid;
  /** For k = 1…6 the cells' zones; null where k zones need not be drawn. */
  readonly labels: readonly (Labels | null)[];
}

interface ZonesAlongRows {
  readonly zones: CellZones;
  /** Share of vines that the rows put elsewhere; null where borders are free. */
  readonly againstGround: number | null;
}

export function decideZones({ input, options, stacked }: ZoningGround, { made: { quality, cleaned }, evidence }: ZoningParts): ZonesDecided {
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
  const toDraw = { grid: input.grid, labels: own.map(({ labels }, i) => (options.drawAll || i + 1 === chosenK ? labels : null)) };
  return { followed, cleaned, verdict, count, isApart, isWorkable, advisedK, chosenK, toDraw };
}

/** Polygons for each number of zones that is to be drawn. */
export function drawZones({ grid, labels }: ZonesToDraw): (readonly ZonePolygons[] | null)[] {
  return labels.map((each) => (each === null ? null : polygonise(grid, each)));
}

export interface ZoneFigures {
  /** For k = 1…6 what each zone is like, without polygons. */
  readonly described: readonly (readonly Zone[])[];
  readonly fruit: FruitCheck;
  /** Zones of the number chosen that all blocks together have, along the rows where that was asked for. */
  readonly leftInAll: number;
}

export function figuresOfZones(ground: ZoningGround, { followed, cleaned, count, chosenK }: ZonesDecided, mark: StageMark = () => {}): ZoneFigures {
  const { input, options, stacked } = ground;
  const layers = layersUsed(ground);
  const described = followed.map(({ zones }) => describeZones({ grid: input.grid, layers, zones }));
  mark('statistics', 0.98);
  // The zones as drawn in every block, along the rows where that was asked for.
  const tested = (chosenK > 1 ? chosenK : count.best) - 1;
  const zonesIn = (part: BlockPart) => (part === stacked.own ? followed[tested]! : alongRows(part, cleaned[tested]!, options.borders)).zones;
  const asDrawn = stacked.parts.map((part) => ({ block: part.block, zones: zonesIn(part) }));
  const fruit = fruitCheck(asDrawn, options.seed);
  mark('fruit', 1);
  return { described, fruit, leftInAll: chosenK > 1 ? zonesAmong(asDrawn.map(({ zones }) => zones.labels)) : 1 };
}

export interface ZoningEnd {
  readonly decided: ZonesDecided;
  readonly drawn: readonly (readonly ZonePolygons[] | null)[];
  readonly figures: ZoneFigures;
}

export function zoningRecord(ground: ZoningGround, { made: { table, quality, memberships }, edges, evidence }: ZoningParts, { decided, drawn, figures: { described, fruit, leftInAll } }: ZoningEnd): ZoningResult {
  const { input, options, stacked, prepared: { layers, warnings }, weights } = ground;
  const { followed, cleaned, verdict, count, isApart, isWorkable, advisedK, chosenK } = decided;
  const numeric = layersUsed(ground).flatMap(({ id, kind }) => (kind === 'number' ? [id] : []));
  const candidates = followed.map(({ zones }, i) => candidateOf(i + 1, { zones, described: described[i]!, drawn: drawn[i]!, numeric, memberships: memberships[i]?.map((band) => stacked.own.planeOf(band, NO_MEMBERSHIP)) ?? null }));
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
    warnings: [...warnings, ...resultWarnings({ chosen: candidates[chosenK - 1]!, leftByCleaning: zonesAmong([cleaned[chosenK - 1]!.labels]), leftInAll, advisedK, noneWorkable: !isWorkable && verdict.verdict !== 'one', table, againstGround: followed[chosenK - 1]!.againstGround })],
  };
}

/** Zones that these planes have between them. */
function zonesAmong(planes: readonly Labels[]): number {
  return new Set(planes.flatMap((labels) => [...cellsPerLabel(labels).entries()].flatMap(([zone, cells]) => (zone > 0 && cells > 0 ? [zone] : [])))).size;
}

function layersUsed({ input, prepared }: ZoningGround): ZoningGround['input']['layers'] {
  return input.layers.filter(({ id }) => prepared.layers.some((layer) => layer.id === id));
}

/** A block's zones with their borders along its rows, if that was asked for. Cells that the rows put into another zone count as wholly doubtful, as those that clean-up moved. */
function alongRows({ block: { grid, planting }, zonesOf }: BlockPart, ofAll: CellZones, borders: ZoningOptions['borders']): ZonesAlongRows {
  const zones = zonesOf(ofAll);
  if (borders === 'free' || !planting) return { zones, againstGround: null };
  const { cellLabels, wrongVines } = snapToRows({ grid, labels: zones.labels, ...planting }, { mode: borders, cutPenalty: CUT_PENALTY });
  const doubt = zones.doubt.slice();
  doubtWhereMoved(doubt, zones.labels, cellLabels);
  return { zones: { labels: cellLabels, doubt }, againstGround: wrongVines / planting.vines.count };
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
