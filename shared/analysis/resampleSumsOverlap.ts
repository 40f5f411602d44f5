/** Adds pixels to every cell they overlap, by shared area, where raster and grid have parallel sides. */
import type { GridFrame } from './grid.ts';
import type { PixelWindow } from './resampleFrame.ts';
import type { PlaneMap } from './resampleMap.ts';
import type { SumTable, TilePart } from './resampleSums.ts';
import { readPixel } from './resampleSumsCentre.ts';

/** For each pixel of one axis, the cells it overlaps: pixel p has parts start[p] … start[p + 1], each a cell and a length in cells. */
interface Overlaps {
  readonly start: Int32Array;
  readonly cells: Int32Array;
  readonly lengths: Float64Array;
}

export interface OverlapTables {
  readonly window: PixelWindow;
  readonly across: Overlaps;
  readonly down: Overlaps;
}

export function overlapTables(grid: GridFrame, map: PlaneMap, window: PixelWindow): OverlapTables {
  const place = new Float64Array(2);
  const edge = (axis: 0 | 1) => (at: number) => {
    map.row({ u: window.firstCol + (axis === 0 ? at : 0), v: window.firstRow + (axis === 1 ? at : 0), count: 1 }, place);
    return place[axis]!;
  };
  return { window, across: overlapsOf(edge(0), window.cols, grid.cols), down: overlapsOf(edge(1), window.rows, grid.rows) };
}

function overlapsOf(edge: (at: number) => number, pixels: number, cellCount: number): Overlaps {
  const start = new Int32Array(pixels + 1);
  const cells: number[] = [];
  const lengths: number[] = [];
  for (let pixel = 0; pixel < pixels; pixel++) {
    const from = Math.max(0, Math.min(edge(pixel), edge(pixel + 1)));
    const to = Math.min(cellCount, Math.max(edge(pixel), edge(pixel + 1)));
    for (let cell = Math.floor(from); cell < to; cell++) {
      cells.push(cell);
      lengths.push(Math.min(to, cell + 1) - Math.max(from, cell));
    }
    start[pixel + 1] = cells.length;
  }
  return { start, cells: Int32Array.from(cells), lengths: Float64Array.from(lengths) };
}

/** A pixel row is summed into a row of cells first, which is then added to each row of cells it overlaps. */
export function addByOverlap({ values, bands, cols, rows }: SumTable, part: TilePart, { window, across, down }: OverlapTables): void {
  const { tile, fromCol, toCol, fromRow, toRow, noData } = part;
  const line = new Float64Array((bands + 1) * cols);
  const pixel = new Float64Array(bands);
  for (let row = fromRow; row < toRow; row++) {
    const firstPart = down.start[row - window.firstRow]!;
    const endPart = down.start[row - window.firstRow + 1]!;
    if (firstPart === endPart) continue;
    line.fill(0);
    const lineStart = (row - tile.firstRow) * tile.storedCols - tile.firstCol;
    for (let col = fromCol; col < toCol; col++) {
      const end = across.start[col - window.firstCol + 1]!;
      let at = across.start[col - window.firstCol]!;
      if (at === end || !readPixel(tile, lineStart + col, { noData, pixel })) continue;
      for (; at < end; at++) {
        const cell = across.cells[at]!;
        const length = across.lengths[at]!;
        for (let band = 0; band < bands; band++) line[band * cols + cell]! += pixel[band]! * length;
        line[bands * cols + cell]! += length;
      }
    }
    for (let at = firstPart; at < endPart; at++) {
      const height = down.lengths[at]!;
      for (let band = 0; band <= bands; band++) {
        const base = band * cols * rows + down.cells[at]! * cols;
        for (let col = 0; col < cols; col++) values[base + col]! += line[band * cols + col]! * height;
      }
    }
  }
}
