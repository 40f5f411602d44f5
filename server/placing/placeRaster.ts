import { defineGrid, type Cells, type Grid } from '../../shared/analysis/grid.ts';
import type { LayerFacts } from '../../shared/analysis/layerFindings.ts';
import { terrainOf } from '../../shared/analysis/terrain.ts';
import { layerType } from '../../shared/catalog/layerTypes.ts';
import { unitFactor } from '../../shared/catalog/sourceUnits.ts';
import type { ImportAnswers } from '../../shared/contracts/imports.ts';
import type { LayerClass } from '../../shared/contracts/layers.ts';
import { indexOf } from '../../shared/importing/questions.ts';
import { ImportProblem } from '../importers/importProblem.ts';
import { readRasterOntoGrids, type RasterQuantity } from '../importers/raster/readRasterOntoGrids.ts';
import type { RasterUnderstood } from '../importers/understood.ts';
import { judgeCells } from './judgeCells.ts';
import { reliefGrid, reliefOf } from './relief.ts';
import type { PlaceInput, PlacedCells, PlacedLayer, TargetBlock } from './placed.ts';
import { readOptionsOf, summaryOf } from './sourceFile.ts';

type Progress = (stage: string, progress: number) => void;

const mostClasses = 60;

/** Layers of a picture on every block it covers: the values asked for, and slope and facing where they are elevations. */
export async function placeRaster({ source, blocks, withRelief = false }: PlaceInput, understood: RasterUnderstood, report: Progress): Promise<PlacedLayer[]> {
  const { answers } = source;
  const grids = blocks.map((block) => defineGrid(block.boundary, block.cellSizeM));
  const land = withRelief && answers.purpose === 'elevation' ? reliefGrid(grids) : null;
  const readings = await readRasterOntoGrids(source.path, readOptionsOf(source), {
    quantity: quantityOf(understood, answers),
    grids: land === null ? grids : [...grids, land],
    ...(answers.noData === undefined ? {} : { noData: answers.noData }),
    onProgress: (done) => report('reading', 0.9 * done),
  });
  report('judging', 0.9);
  const type = rasterType(answers);
  const factor = unitFactor(answers.purpose!, answers.unit);
  const cells = readings.map((reading) => (factor === 1 ? reading.cells : reading.cells.map((value) => value * factor)));
  const placing: Placing = { understood, answers, blocks, grids };
  const main = layerOf(placing, type, cells);
  if (type !== 'elevation') return [main];
  return [land === null ? main : { ...main, relief: reliefOf(land, cells.at(-1)!) }, ...terrainLayers(placing, cells.slice(0, grids.length))];
}

interface Placing {
  understood: RasterUnderstood;
  answers: ImportAnswers;
  blocks: readonly TargetBlock[];
  grids: readonly Grid[];
}

function rasterType(answers: ImportAnswers): string {
  if (answers.purpose === 'soil') return answers.soilAs === 'classes' ? 'soilClass' : 'soilNumber';
  return answers.purpose!;
}

function quantityOf(understood: RasterUnderstood, answers: ImportAnswers): RasterQuantity {
  const index = indexOf({ file: summaryOf(understood), answers });
  if (index !== null) {
    return { kind: 'index', index, bands: { ...(answers.nirBand ? { nir: answers.nirBand } : {}), ...(answers.redBand ? { red: answers.redBand } : {}), ...(answers.greenBand ? { green: answers.greenBand } : {}), ...(answers.redEdgeBand ? { redEdge: answers.redEdgeBand } : {}) } };
  }
  const method = answers.purpose === 'elevation' ? 'surface' : answers.soilAs === 'classes' ? 'nearest' : 'mean';
  return { kind: 'band', band: answers.band ?? understood.bands[0]!.index, method };
}

function layerOf({ understood, answers, blocks, grids }: Placing, type: string, cells: readonly Cells[]): PlacedLayer {
  const index = indexOf({ file: summaryOf(understood), answers }) ?? (answers.holds === undefined || answers.holds === 'other' ? null : answers.holds);
  const placed = placeOnBlocks({ blocks, grids, cells }, (block): LayerFacts => ({
    type,
    index,
    measuredOn: answers.capturedOn ?? null,
    pixelSizeM: understood.pixelSizeM,
    rowSpacingM: block.rowSpacingM,
    alleys: answers.alleys ?? null,
    steelTrellis: answers.steelTrellis ?? null,
    pointCount: null,
  }));
  const unit = type === 'soilNumber' ? (answers.unit ?? '') : layerType(type).unit;
  return { type, derivedFrom: null, unit, value: index ?? (understood.bands.length > 1 ? `band ${answers.band}` : null), classes: type === 'soilClass' ? classesOf(placed) : null, pixelSizeM: understood.pixelSizeM, reference: understood.crsName, blocks: placed };
}

/** Slope and the two parts of the facing, computed on the block's own cells from elevations in metres. */
function terrainLayers(placing: Placing, elevations: readonly Cells[]): PlacedLayer[] {
  const terrains = elevations.map((elevation, at) => terrainOf({ elevation, cols: placing.grids[at]!.cols, cellSizeM: placing.grids[at]!.cellSizeM }));
  const parts = [['slope', terrains.map((terrain) => terrain.slopeDeg)], ['northness', terrains.map((terrain) => terrain.northness)], ['eastness', terrains.map((terrain) => terrain.eastness)]] as const;
  return parts.map(([type, cells]) => ({ ...layerOf(placing, type, cells), derivedFrom: 'elevation', value: null }));
}

/** Judged cells of each block that has any. */
export function placeOnBlocks({ blocks, grids, cells }: { blocks: readonly TargetBlock[]; grids: readonly Grid[]; cells: readonly Cells[] }, factsOf: (block: TargetBlock, at: number) => LayerFacts): PlacedCells[] {
  return blocks.flatMap((block, at) => judgeCells(block.id, { grid: grids[at]!, cells: cells[at]!, facts: factsOf(block, at) }) ?? []);
}

/** Codes of a picture of classes as they stand in the file; the legend gives them names. */
function classesOf(placed: readonly PlacedCells[]): LayerClass[] {
  const codes = [...new Set(placed.flatMap((block) => (block.statistics.classes ?? []).map((entry) => entry.value)))].sort((a, b) => a - b);
  const odd = codes.find((code) => !Number.isInteger(code));
  if (odd !== undefined) throw new ImportProblem({ code: 'bad-request', fact: `Its values are measurements (${odd}), not class numbers.`, remedy: 'Take it as numbers instead of classes.', params: { value: odd } });
  if (codes.length > mostClasses) throw new ImportProblem({ code: 'bad-request', fact: `It has ${codes.length} different class numbers over the blocks; ${mostClasses} is the most.`, remedy: 'Take it as numbers instead of classes, or merge classes first.', params: { classes: codes.length, most: mostClasses } });
  return codes.map((value) => ({ value, name: String(value), colour: null }));
}
