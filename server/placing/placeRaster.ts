import type { CanopyFigures } from '../../shared/analysis/canopyCells.ts';
import { defineGrid, type Cells, type Grid } from '../../shared/analysis/grid.ts';
import type { LayerFacts } from '../../shared/analysis/layerFindings.ts';
import { terrainOf } from '../../shared/analysis/terrain.ts';
import { layerType } from '../../shared/catalog/layerTypes.ts';
import { unitFactor } from '../../shared/catalog/sourceUnits.ts';
import type { ImportAnswers } from '../../shared/contracts/imports.ts';
import type { LayerClass } from '../../shared/contracts/layers.ts';
import { toUtm } from '../../shared/geo/utm.ts';
import { indexOf } from '../../shared/importing/questions.ts';
import { ImportProblem } from '../importers/importProblem.ts';
import { readCanopyOntoGrids, type CanopyGrid } from '../importers/raster/readCanopyOntoGrids.ts';
import { readRasterOntoGrids, type GridReading, type RasterQuantity } from '../importers/raster/readRasterOntoGrids.ts';
import type { RasterUnderstood } from '../importers/understood.ts';
import { judgeCells } from './judgeCells.ts';
import { reliefGrid, reliefOf } from './relief.ts';
import type { PlaceInput, PlacedCells, PlacedLayer, TargetBlock } from './placed.ts';
import { mixedScale } from './scaleAlarm.ts';
import { readOptionsOf, summaryOf } from './sourceFile.ts';

type Progress = (stage: string, progress: number) => void;

const mostClasses = 60;

/** Layers of a picture on every block it covers: the values asked for, and slope and facing where they are elevations. */
export async function placeRaster({ source, blocks, withRelief = false }: PlaceInput, understood: RasterUnderstood, report: Progress): Promise<PlacedLayer[]> {
  const { answers } = source;
  const grids = blocks.map((block) => defineGrid(block.boundary, block.cellSizeM));
  const land = withRelief && answers.purpose === 'elevation' ? reliefGrid(grids) : null;
  const common = { quantity: quantityOf(understood, answers), ...(answers.noData === undefined ? {} : { noData: answers.noData }), onProgress: (done: number) => report('reading', 0.9 * done) };
  const readings: readonly (GridReading & { canopy?: CanopyFigures })[] = isCanopyOnly(answers)
    ? await readCanopyOntoGrids(source.path, readOptionsOf(source), { ...common, holds: answers.holds === undefined || answers.holds === 'other' ? null : answers.holds, grids: canopyGrids(blocks, grids, answers) })
    : await readRasterOntoGrids(source.path, readOptionsOf(source), { ...common, grids: land === null ? grids : [...grids, land] });
  report('judging', 0.9);
  const type = rasterType(answers);
  const factor = unitFactor(answers.purpose!, answers.unit);
  const cells = readings.map((reading) => (factor === 1 ? reading.cells : reading.cells.map((value) => value * factor)));
  const placing: Placing = { understood, answers, blocks, grids, readings };
  const main = layerOf(placing, type, cells);
  if (type !== 'elevation') return [main];
  return [land === null ? main : { ...main, relief: reliefOf(land, cells.at(-1)!) }, ...terrainLayers(placing, cells.slice(0, grids.length))];
}

interface Placing {
  understood: RasterUnderstood;
  answers: ImportAnswers;
  blocks: readonly TargetBlock[];
  grids: readonly Grid[];
  readings: readonly (GridReading & { canopy?: CanopyFigures })[];
}

function isCanopyOnly({ purpose, canopy }: ImportAnswers): boolean {
  return purpose === 'vigour' && (canopy === 'threshold' || canopy === 'rows');
}

/** Blocks as canopy is read on them. Between rows a cell takes the canopy of the rows beside it. */
function canopyGrids(blocks: readonly TargetBlock[], grids: readonly Grid[], { canopy }: ImportAnswers): CanopyGrid[] {
  if (canopy === 'rows' && blocks.every(({ rows }) => rows.length === 0)) {
    throw new ImportProblem({ code: 'bad-request', fact: 'None of the blocks it covers has rows yet.', remedy: 'Lay the rows of the block first, or tell canopy by its index.', params: { why: 'no-rows-yet' } });
  }
  return grids.map((grid, at) => ({
    grid,
    reachM: blocks[at]!.rowSpacingM,
    rowsXY: canopy === 'rows' ? blocks[at]!.rows.map((line) => line.map((position) => toUtm(position, grid.epsg))) : null,
  }));
}

function rasterType(answers: ImportAnswers): string {
  if (answers.purpose === 'soil') return answers.soilAs === 'classes' ? 'soilClass' : 'soilNumber';
  return answers.purpose!;
}

function quantityOf(understood: RasterUnderstood, answers: ImportAnswers): RasterQuantity {
  const index = indexOf({ file: summaryOf(understood), answers });
  if (index !== null) {
    return {
      kind: 'index',
      index,
      bands: {
        ...(answers.nirBand ? { nir: answers.nirBand } : {}),
        ...(answers.redBand ? { red: answers.redBand } : {}),
        ...(answers.greenBand ? { green: answers.greenBand } : {}),
        ...(answers.redEdgeBand ? { redEdge: answers.redEdgeBand } : {}),
      },
    };
  }
  const method = answers.purpose === 'elevation' ? 'surface' : answers.soilAs === 'classes' ? 'nearest' : 'mean';
  return { kind: 'band', band: answers.band ?? understood.bands[0]!.index, method };
}

function layerOf({ understood, answers, blocks, grids, readings }: Placing, type: string, cells: readonly Cells[]): PlacedLayer {
  const index = indexOf({ file: summaryOf(understood), answers }) ?? (answers.holds === undefined || answers.holds === 'other' ? null : answers.holds);
  const scaleTimes = mixedScale(understood.boundsLonLat!, blocks.map(({ boundary }) => boundary), grids[0]!.epsg);
  const placed = placeOnBlocks({ blocks, grids, cells }, (block, at): LayerFacts => ({
    ...factsFromAnswers(answers, block),
    type,
    index,
    pixelSizeM: understood.pixelSizeM,
    pointCount: null,
    bandMeans: readings[at]!.bandMeans,
    canopy: readings[at]!.canopy ?? null,
    scaleTimes,
    ...heightFacts(understood, answers),
  }));
  const unit = type === 'soilNumber' ? (answers.unit ?? '') : layerType(type).unit;
  return {
    type,
    derivedFrom: null,
    unit,
    value: index ?? (understood.bands.length > 1 ? `band ${answers.band}` : null),
    classes: type === 'soilClass' ? classesOf(placed) : null,
    pixelSizeM: understood.pixelSizeM,
    reference: understood.crsName,
    blocks: placed,
  };
}

/** What file and person say about the unit of heights. */
function heightFacts({ verticalUnit, reference }: RasterUnderstood, { purpose, unit }: ImportAnswers): Pick<LayerFacts, 'heightUnit' | 'heightUnitInFile' | 'gridInFeet'> {
  if (purpose !== 'elevation') return {};
  const metresAUnit = reference?.unitM ?? 1;
  return { heightUnit: unit ?? 'm', heightUnitInFile: verticalUnit === null ? null : verticalUnit === 'metre' ? 'm' : 'ft', gridInFeet: Math.abs(metresAUnit - 0.3048) < 0.001 };
}

/** Slope and the two parts of the facing, computed on the block's own cells from elevations in metres. */
function terrainLayers(placing: Placing, elevations: readonly Cells[]): PlacedLayer[] {
  const terrains = elevations.map((elevation, at) => terrainOf({ elevation, cols: placing.grids[at]!.cols, cellSizeM: placing.grids[at]!.cellSizeM }));
  const parts = [['slope', terrains.map((terrain) => terrain.slopeDeg)], ['northness', terrains.map((terrain) => terrain.northness)], ['eastness', terrains.map((terrain) => terrain.eastness)]] as const;
  return parts.map(([type, cells]) => ({ ...layerOf(placing, type, cells), derivedFrom: 'elevation', value: null }));
}

/** What people told about a file and a block, as the findings want it. */
export function factsFromAnswers(answers: ImportAnswers, block: TargetBlock): Pick<LayerFacts, 'measuredOn' | 'rowSpacingM' | 'rowBearingDeg' | 'alleys' | 'steelTrellis' | 'growthStage'> {
  return { measuredOn: answers.capturedOn ?? null, rowSpacingM: block.rowSpacingM, rowBearingDeg: block.rowBearingDeg, alleys: answers.alleys ?? null, steelTrellis: answers.steelTrellis ?? null, growthStage: answers.growthStage ?? null };
}

/** Judged cells of each block that has any. */
export function placeOnBlocks({ blocks, grids, cells }: { blocks: readonly TargetBlock[]; grids: readonly Grid[]; cells: readonly Cells[] }, factsOf: (block: TargetBlock, at: number) => LayerFacts): PlacedCells[] {
  return blocks.flatMap((block, at) => judgeCells(block.id, { grid: grids[at]!, cells: cells[at]!, facts: factsOf(block, at) }) ?? []);
}

/** Codes of a picture of classes as they stand in the file; the legend gives them names. */
function classesOf(placed: readonly PlacedCells[]): LayerClass[] {
  const codes = [...new Set(placed.flatMap((block) => (block.statistics.classes ?? []).map((entry) => entry.value)))].sort((a, b) => a - b);
  const odd = codes.find((code) => !Number.isInteger(code));
  if (odd !== undefined) throw new ImportProblem({ code: 'bad-request', fact: `Its values are measurements (${odd}), not class numbers.`, remedy: 'Take it as numbers instead of classes.', params: { why: 'not-classes', value: odd } });
  if (codes.length > mostClasses)
    throw new ImportProblem({
      code: 'bad-request',
      fact: `It has ${codes.length} different class numbers over the blocks; ${mostClasses} is the most.`,
      remedy: 'Take it as numbers instead of classes, or merge classes first.',
      params: { why: 'many-classes', classes: codes.length, most: mostClasses },
    });
  return codes.map((value) => ({ value, name: String(value), colour: null }));
}
