/**
 * Cells of one size for blocks whose cells differ: the finer block is looked at in the coarser cells, and what is found there
 * goes back onto its own. Coarser, not finer: averaging loses detail, dividing would make some up.
 * In: a block with its layers. Out: the same on coarser cells, and the way back. Cost: one pass over the cells a layer.
 */

import { cellAt, cellCentre, gridOfOutline, type Cells, type Grid } from './grid.ts';
import { withGapsFilled, type CellZones } from './zoningFit.ts';
import type { BlockInput, ZoningLayer } from './zoningTypes.ts';

/** Cells are of one size when they differ by less than this share. */
const SAME_SIZE = 1e-9;

/** The size of cell that several blocks are zoned on: the coarsest of them, metres. */
export function commonCellSizeM(blocks: readonly BlockInput[]): number {
  return Math.max(...blocks.map(({ grid }) => grid.cellSizeM));
}

/** The block on cells of `cellSizeM`, at least as coarse as its own; the block itself when they are its own. */
export function onCellsOf(cellSizeM: number, block: Pick<BlockInput, 'grid' | 'layers'>): Pick<BlockInput, 'grid' | 'layers'> {
  const { grid, layers } = block;
  if (isOfSize(grid, cellSizeM)) return block;
  const coarse = gridOfOutline(grid.outlineXY, grid.epsg, cellSizeM);
  const parts = coverOf(grid, coarse);
  return { grid: coarse, layers: layers.map((layer) => ({ ...layer, cells: coarsened(layer, parts, coarse) })) };
}

/** Zones found on coarser cells, on the block's own: each cell takes those at its centre. Beyond the coarse outline the nearest, wholly doubtful. */
export function backOnto(grid: Grid, coarse: Grid, zones: CellZones): CellZones {
  if (isOfSize(grid, coarse.cellSizeM)) return zones;
  const labels = new Uint8Array(grid.inside.length);
  const doubt = new Float32Array(grid.inside.length).fill(NaN);
  for (let cell = 0; cell < labels.length; cell++) {
    if (grid.inside[cell] === 0) continue;
    const from = cellAt(coarse, cellCentre(grid, cell));
    labels[cell] = zones.labels[from] ?? 0;
    doubt[cell] = labels[cell] === 0 ? 1 : zones.doubt[from]!;
  }
  return { labels: withGapsFilled(grid, labels), doubt };
}

/** A plane of coarser cells on the block's own: each cell inside takes what lies at its centre, and `missing` beyond them. */
export function planeBackOnto(grid: Grid, coarse: Grid, plane: Uint8Array, missing: number): Uint8Array {
  if (isOfSize(grid, coarse.cellSizeM)) return plane;
  return Uint8Array.from(grid.inside, (inside, cell) => (inside === 0 ? missing : (plane[cellAt(coarse, cellCentre(grid, cell))] ?? missing)));
}

function isOfSize({ cellSizeM }: Grid, wantedM: number): boolean {
  return Math.abs(cellSizeM / wantedM - 1) < SAME_SIZE;
}

/** A fine cell's column (or row) in coarse ones: the first that it lies in, the share of it there; the rest lies in the next. */
interface Cover {
  readonly first: Int32Array;
  readonly share: Float64Array;
}

interface CoverOfGrid {
  readonly cols: Cover;
  readonly rows: Cover;
}

function coverOf(fine: Grid, coarse: Grid): CoverOfGrid {
  const ratio = fine.cellSizeM / coarse.cellSizeM;
  return {
    cols: coverAlong(fine.cols, (fine.x0 - coarse.x0) / coarse.cellSizeM, ratio),
    rows: coverAlong(fine.rows, (coarse.y0 - fine.y0) / coarse.cellSizeM, ratio),
  };
}

function coverAlong(count: number, start: number, ratio: number): Cover {
  const first = new Int32Array(count);
  const share = new Float64Array(count);
  for (let at = 0; at < count; at++) {
    const from = start + at * ratio;
    first[at] = Math.floor(from + SAME_SIZE);
    share[at] = Math.min(1, (first[at]! + 1 - from) / ratio);
  }
  return { first, share };
}

/** Means weighted by area, of classes the one with most area; NaN where nothing is known. */
function coarsened({ kind, cells }: ZoningLayer, cover: CoverOfGrid, coarse: Grid): Cells {
  const out = new Float32Array(coarse.inside.length).fill(NaN);
  const weights = new Float64Array(out.length);
  if (kind === 'class') {
    const heaviest = new Float64Array(out.length);
    for (const code of new Set(cells.filter((value) => !Number.isNaN(value)))) {
      weights.fill(0);
      eachPart(cover, coarse, (fine, cell, weight) => { if (cells[fine] === code) weights[cell] = weights[cell]! + weight; });
      weights.forEach((weight, cell) => { if (weight > heaviest[cell]!) [heaviest[cell], out[cell]] = [weight, code]; });
    }
    return out;
  }
  const sums = new Float64Array(out.length);
  eachPart(cover, coarse, (fine, cell, weight) => {
    if (Number.isNaN(cells[fine]!)) return;
    weights[cell] = weights[cell]! + weight;
    sums[cell] = sums[cell]! + weight * cells[fine]!;
  });
  return out.map((_, cell) => (weights[cell]! > 0 ? sums[cell]! / weights[cell]! : NaN));
}

/** Every fine cell with each coarse cell that it lies in, up to four, and the share of it there. */
function eachPart({ cols, rows }: CoverOfGrid, coarse: Grid, use: (fine: number, cell: number, weight: number) => void): void {
  for (let row = 0, fine = 0; row < rows.first.length; row++) {
    for (let col = 0; col < cols.first.length; col++, fine++) {
      for (const down of [0, 1]) {
        for (const right of [0, 1]) {
          const weight = (down === 0 ? rows.share[row]! : 1 - rows.share[row]!) * (right === 0 ? cols.share[col]! : 1 - cols.share[col]!);
          const [toRow, toCol] = [rows.first[row]! + down, cols.first[col]! + right];
          if (weight > SAME_SIZE && toRow >= 0 && toRow < coarse.rows && toCol >= 0 && toCol < coarse.cols) use(fine, toRow * coarse.cols + toCol, weight);
        }
      }
    }
  }
}
