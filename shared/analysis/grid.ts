/**
 * The common grid of a block: a function of its outline and a cell size, so every layer of a block lands on the same cells.
 * In: outline in degrees, cell size in metres. Out: cells in the UTM zone of the block, row 0 in the north, cell index
 * `row * cols + col`, edges on whole multiples of the cell size. Cost: one pass over the outline and the cells.
 */
import { boundsOf } from '../geo/bounds.ts';
import type { MultiPolygonLonLat, MultiPolygonXY, XY } from '../geo/coordinates.ts';
import { polygonsCentroid } from '../geo/rings.ts';
import { polygonsToUtm, utmEpsg } from '../geo/utm.ts';
import { AnalysisError } from './analysisError.ts';
import { eachCellShare, type CellRing } from './cellShares.ts';

export interface Grid {
  /** Names the cells: equal keys mean equal cells. Every stored array of cells carries it. */
  readonly key: string;
  /** UTM zone of the block, 326zz or 327zz. */
  readonly epsg: number;
  /** West edge of column 0 and north edge of row 0, metres, multiples of the cell size. */
  readonly x0: number;
  readonly y0: number;
  readonly cellSizeM: number;
  readonly cols: number;
  readonly rows: number;
  /** Share of each cell's area inside the block, 0…1. */
  readonly share: Float32Array;
  /** 1 where at least half of the cell is inside the block: the cells that carry a label. */
  readonly inside: Uint8Array;
  /** The block's outline in the grid's own metres. */
  readonly outlineXY: MultiPolygonXY;
}

/** One number per cell of a grid, NaN where missing. */
export type Cells = Float32Array;

/** One zone number per cell: 1 … 255 inside the block, 0 outside. */
export type Labels = Uint8Array;

const MAX_CELLS = 16_000_000;

/**
 * The grid of a block. The UTM zone is the one of the outline's centroid.
 * Throws AnalysisError for an outline without area, a cell size that is not positive, or more than MAX_CELLS cells.
 * Example: a 100 m × 60 m rectangle on whole multiples of 2 m gives 50 × 30 cells, all with share 1.
 */
export function defineGrid(boundaryLonLat: MultiPolygonLonLat, cellSizeM: number): Grid {
  const centroid = polygonsCentroid(boundaryLonLat);
  const epsg = utmEpsg(centroid);
  return gridOfOutline(polygonsToUtm(boundaryLonLat, epsg), epsg, cellSizeM);
}

/** The same from an outline that is already in the metres of a UTM zone. */
export function gridOfOutline(outlineXY: MultiPolygonXY, epsg: number, cellSizeM: number): Grid {
  const frame = frameOf(outlineXY, cellSizeM);
  const share = new Float32Array(frame.cols * frame.rows);
  const rings = outlineXY.map((polygon) => polygon.map((ring) => toCellRing(ring, frame)));
  eachCellShare(rings, frame, (cell, part) => (share[cell] = part));
  const inside = new Uint8Array(share.length);
  for (let cell = 0; cell < share.length; cell++) {
    const part = share[cell]!;
    if (part > 1.001 || part < -0.001) {
      throw new AnalysisError('outline-overlaps', 'The outline covers some ground twice: it crosses itself or its parts overlap. Correct the outline.');
    }
    share[cell] = part < 1e-6 ? 0 : Math.min(1, part);
    inside[cell] = part >= 0.5 - 1e-6 ? 1 : 0;
  }
  return { key: gridKey(outlineXY, epsg, frame), epsg, ...frame, share, inside, outlineXY };
}

export interface GridFrame {
  readonly x0: number;
  readonly y0: number;
  readonly cellSizeM: number;
  readonly cols: number;
  readonly rows: number;
}

function frameOf(outlineXY: MultiPolygonXY, cellSizeM: number): GridFrame {
  if (!(cellSizeM > 0) || !Number.isFinite(cellSizeM)) {
    throw new AnalysisError('cell-size', `A cell size of ${cellSizeM} m cannot be used; give a number of metres above 0.`);
  }
  const [minX, minY, maxX, maxY] = boundsOf(outlineXY.flat());
  if (!(maxX > minX && maxY > minY)) throw new AnalysisError('outline-empty', 'The outline has no area; draw a ring of at least three corners.');
  // A tenth of a millimetre of slack keeps an edge drawn on a cell border from adding an empty row of cells.
  const slack = 1e-4 / cellSizeM;
  const west = Math.floor(minX / cellSizeM + slack);
  const east = Math.max(west + 1, Math.ceil(maxX / cellSizeM - slack));
  const south = Math.floor(minY / cellSizeM + slack);
  const north = Math.max(south + 1, Math.ceil(maxY / cellSizeM - slack));
  const cols = east - west;
  const rows = north - south;
  if (cols * rows > MAX_CELLS) {
    throw new AnalysisError('grid-too-large', `Cells of ${cellSizeM} m would give ${cols * rows} cells; at most ${MAX_CELLS} can be handled. Use larger cells.`);
  }
  return { x0: west * cellSizeM, y0: north * cellSizeM, cellSizeM, cols, rows };
}

/** A ring in cell units: u to the east from the west edge, v to the south from the north edge. */
export function toCellRing(ring: readonly XY[], frame: GridFrame): CellRing {
  const out = new Float64Array(ring.length * 2);
  ring.forEach(([x, y], at) => {
    out[2 * at] = (x - frame.x0) / frame.cellSizeM;
    out[2 * at + 1] = (frame.y0 - y) / frame.cellSizeM;
  });
  return out;
}

/** Refuses an array that has not one value per cell. */
export function assertCellCount(grid: Grid, cells: ArrayLike<number>, what: string): void {
  const wanted = grid.cols * grid.rows;
  if (cells.length !== wanted) throw new AnalysisError('cell-count', `${what} has ${cells.length} cells; the grid has ${wanted}.`);
}

/** Index of the cell a position lies in, or -1 outside the grid. */
export function cellAt(grid: GridFrame, xy: XY): number {
  const col = Math.floor((xy[0] - grid.x0) / grid.cellSizeM);
  const row = Math.floor((grid.y0 - xy[1]) / grid.cellSizeM);
  return col >= 0 && col < grid.cols && row >= 0 && row < grid.rows ? row * grid.cols + col : -1;
}

/** Centre of a cell. */
export function cellCentre(grid: GridFrame, cell: number): XY {
  const row = Math.floor(cell / grid.cols);
  return [grid.x0 + (cell - row * grid.cols + 0.5) * grid.cellSizeM, grid.y0 - (row + 0.5) * grid.cellSizeM];
}

/** The values of a layer inside the block, without the missing ones, in the order of the cells; a new array. */
export function valuesInside(grid: Grid, cells: Cells): Float32Array {
  const { inside } = grid;
  const values = new Float32Array(cells.length);
  let count = 0;
  for (let cell = 0; cell < cells.length; cell++) {
    const value = cells[cell]!;
    if (inside[cell] === 1 && !Number.isNaN(value)) values[count++] = value;
  }
  return values.slice(0, count);
}

/** Two 32-bit FNV-1a hashes of the outline in whole centimetres (Fowler, Noll & Vo; constants from memory) after the frame in words. */
function gridKey(outlineXY: MultiPolygonXY, epsg: number, { x0, y0, cellSizeM, cols, rows }: GridFrame): string {
  let first = 0x811c9dc5;
  let second = 0x050c5d1f;
  const mix = (value: number) => {
    first = Math.imul(first ^ (value & 0xffff), 0x01000193);
    second = Math.imul(second ^ (value & 0xffff), 0x01000193) ^ (first >>> 15);
  };
  for (const rings of outlineXY) {
    mix(rings.length);
    for (const ring of rings) {
      mix(ring.length);
      for (const [x, y] of ring) {
        for (const cm of [Math.round((x - x0) * 100), Math.round((y0 - y) * 100)]) {
          mix(cm);
          mix(cm / 65536);
        }
      }
    }
  }
  const hex = (value: number) => (value >>> 0).toString(16).padStart(8, '0');
  return `g1-${epsg}-${x0}-${y0}-${cellSizeM}-${cols}x${rows}-${hex(first)}${hex(second)}`;
}
