/**
 * Several blocks zoned as one, so that zones of one number are of one kind in all of them. Their grids are stacked in one plane,
 * so far apart that neither smoothing nor any comparison at a distance reaches from one to the next; what comes out is cut
 * apart again. Where their cells differ in size, all are looked at in the coarsest. In: the block itself and the others. Out: one grid
 * with its layers, and each block with the way back onto its own cells.
 * The order is that of the grids' names, so each of the blocks gets the same outcome whichever asks. Cost: a copy of the cells.
 */

import type { MultiPolygonXY } from '../geo/coordinates.ts';
import { AnalysisError } from './analysisError.ts';
import { backOnto, commonCellSizeM, onCellsOf, planeBackOnto } from './commonCells.ts';
import type { Cells, Grid } from './grid.ts';
import type { CellZones } from './zoningFit.ts';
import type { BlockInput, ZoningLayer } from './zoningTypes.ts';

export interface StackedBlocks {
  readonly grid: Grid;
  readonly layers: readonly ZoningLayer[];
  /** Every block, in an order that does not depend on which one asks. */
  readonly parts: readonly BlockPart[];
  /** The one of them that was asked about. */
  readonly own: BlockPart;
}

export interface BlockPart {
  readonly block: BlockInput;
  /** The block's part of what was made of all, on its own cells. */
  readonly zonesOf: (zones: CellZones) => CellZones;
  /** The same of a plane of bytes; `missing` stands where the block's cells reach beyond it. */
  readonly planeOf: (plane: Uint8Array, missing: number) => Uint8Array;
}

export function stackBlocks(asked: BlockInput, askedWith: readonly BlockInput[]): StackedBlocks {
  if (askedWith.length === 0) {
    const own = { block: asked, zonesOf: (zones: CellZones) => zones, planeOf: (plane: Uint8Array) => plane };
    return { grid: asked.grid, layers: asked.layers, parts: [own], own };
  }
  for (const block of askedWith) assertFits(asked, block);
  const cellSizeM = commonCellSizeM([asked, ...askedWith]);
  const { grid, layers } = onCellsOf(cellSizeM, asked);
  const whole = [asked, ...askedWith].map((block) => ({ block, onCells: onCellsOf(cellSizeM, block) })).sort((a, b) => (a.onCells.grid.key < b.onCells.grid.key ? -1 : 1));
  const blocks = whole.map(({ onCells }) => onCells);
  const place = placesOf(blocks.map((block) => block.grid));
  const share = new Float32Array(place.cols * place.rows);
  const inside = new Uint8Array(share.length);
  blocks.forEach((block, at) => {
    put(share, block.grid.share, { block, place, at });
    put(inside, block.grid.inside, { block, place, at });
  });
  const stacked: Grid = { ...grid, key: blocks.map((block) => block.grid.key).join(' '), cols: place.cols, rows: place.rows, share, inside, outlineXY: blocks.flatMap((block): MultiPolygonXY => [...block.grid.outlineXY]) };
  const parts = whole.map(({ block, onCells }, at): BlockPart => {
    const from = { grid: onCells.grid, cols: place.cols, start: place.firstRows[at]! };
    return { block, zonesOf: ({ labels, doubt }) => backOnto(block.grid, from.grid, { labels: cut(labels, from), doubt: cut(doubt, from) }), planeOf: (plane, missing) => planeBackOnto(block.grid, from.grid, cut(plane, from), missing) };
  });
  return { grid: stacked, layers: layers.map((layer) => ({ ...layer, cells: stackedCells(layer.id, blocks, place) })), parts, own: parts.find(({ block }) => block === asked)! };
}

interface Places {
  readonly cols: number;
  readonly rows: number;
  readonly firstRows: readonly number[];
}

/** Further apart than the square root of all cells, which is as far as covariances are looked at, and than any smoothing. */
function placesOf(grids: readonly Grid[]): Places {
  const apart = Math.ceil(Math.sqrt(grids.reduce((sum, { inside }) => sum + inside.length, 0))) + 1;
  let rows = 0;
  const firstRows = grids.map((grid) => {
    const first = rows;
    rows += grid.rows + apart;
    return first;
  });
  return { cols: Math.max(...grids.map(({ cols }) => cols)), rows: rows - apart, firstRows };
}

interface Placing {
  readonly block: BlockInput;
  readonly place: Places;
  readonly at: number;
}

function put(into: Float32Array | Uint8Array, from: Float32Array | Uint8Array, { block: { grid }, place, at }: Placing): void {
  for (let row = 0; row < grid.rows; row++) into.set(from.subarray(row * grid.cols, (row + 1) * grid.cols), (place.firstRows[at]! + row) * place.cols);
}

function stackedCells(id: string, blocks: readonly BlockInput[], place: Places): Cells {
  const cells = new Float32Array(place.cols * place.rows).fill(NaN);
  blocks.forEach((block, at) => put(cells, block.layers.find((layer) => layer.id === id)!.cells, { block, place, at }));
  return cells;
}

function cut<Values extends Uint8Array | Float32Array>(from: Values, { grid, cols, start }: { grid: Grid; cols: number; start: number }): Values {
  const into = from.slice(0, grid.cols * grid.rows) as Values;
  for (let row = 0; row < grid.rows; row++) into.set(from.subarray((start + row) * cols, (start + row) * cols + grid.cols), row * grid.cols);
  return into;
}

function assertFits(own: BlockInput, other: BlockInput): void {
  const missing = own.layers.find(({ id }) => !other.layers.some((layer) => layer.id === id));
  if (missing) throw new AnalysisError('layer-missing', `Layer "${missing.name ?? missing.id}" does not lie on all of the blocks; leave it out or zone them apart.`);
}
