/** Adds pixels to the cell their centre lies in. The straight loops that all fine rasters go through. */
import type { GridFrame } from './grid.ts';
import type { PixelWindow } from './resampleFrame.ts';
import type { PlaneMap } from './resampleMap.ts';
import type { SumTable, TilePart } from './resampleSums.ts';
import { addPairs } from './resampleSumsPairs.ts';
import type { PixelTile } from './resampleTile.ts';

/** Column of cells for each pixel column of the window, and row of cells for each pixel row; -1 outside the grid. */
export interface CentreTables {
  readonly window: PixelWindow;
  readonly colOf: Int32Array;
  /** For each pixel column the first one after it that lies in another column of cells, or the window's end. */
  readonly runEnd: Int32Array;
  readonly rowOf: Int32Array;
}

export function centreTables(grid: GridFrame, map: PlaneMap, window: PixelWindow): CentreTables {
  const within = (position: number, count: number) => (position >= 0 && position < count ? Math.floor(position) : -1);
  const place = new Float64Array(2);
  const colOf = new Int32Array(window.cols).map((_, at) => {
    map.row({ u: window.firstCol + at + 0.5, v: window.firstRow + 0.5, count: 1 }, place);
    return within(place[0]!, grid.cols);
  });
  const rowOf = new Int32Array(window.rows).map((_, at) => {
    map.row({ u: window.firstCol + 0.5, v: window.firstRow + at + 0.5, count: 1 }, place);
    return within(place[1]!, grid.rows);
  });
  const runEnd = new Int32Array(window.cols);
  for (let at = window.cols - 1; at >= 0; at--) runEnd[at] = at + 1 < window.cols && colOf[at + 1] === colOf[at] ? runEnd[at + 1]! : at + 1;
  return { window, colOf, runEnd, rowOf };
}

/** Raster and grid with parallel sides: sums run along a pixel row until the cell changes. */
export function addByCentreTable(sums: SumTable, part: TilePart, tables: CentreTables): void {
  if (addPairs(sums, part, tables)) return;
  const { window, colOf, runEnd, rowOf } = tables;
  const { tile, fromRow, toRow } = part;
  for (let row = fromRow; row < toRow; row++) {
    const cellRow = rowOf[row - window.firstRow]!;
    if (cellRow < 0) continue;
    const lineStart = (row - tile.firstRow) * tile.storedCols - tile.firstCol;
    const line = { colOf, runEnd, firstCol: window.firstCol, cellStart: cellRow * sums.cols, lineStart };
    if (sums.bands === 1) addLineOfOne(sums, part, line);
    else if (sums.bands === 2) addLineOfTwo(sums, part, line);
    else addLineOfMany(sums, part, line);
  }
}

/** `lineStart + col` is the stored pixel of a raster column. */
interface Line {
  readonly colOf: Int32Array;
  readonly runEnd: Int32Array;
  readonly firstCol: number;
  readonly cellStart: number;
  readonly lineStart: number;
}

function addLineOfOne({ values, cols, rows }: SumTable, { tile, noData, fromCol, toCol }: TilePart, { colOf, runEnd, firstCol, cellStart, lineStart }: Line): void {
  const { values: samples, offset, stride } = tile.bands[0]!;
  const missing = noData[0]!;
  const weights = cols * rows;
  let at = (lineStart + fromCol) * stride + offset;
  for (let col = fromCol; col < toCol; ) {
    const cellCol = colOf[col - firstCol]!;
    const end = Math.min(toCol, firstCol + runEnd[col - firstCol]!);
    let sum = 0;
    let count = 0;
    for (; col < end; col++, at += stride) {
      const sample = samples[at]!;
      if (sample === missing || sample - sample !== 0) continue;
      sum += sample;
      count++;
    }
    if (cellCol < 0) continue;
    values[cellStart + cellCol]! += sum;
    values[weights + cellStart + cellCol]! += count;
  }
}

function addLineOfTwo({ values, cols, rows }: SumTable, { tile, noData, fromCol, toCol }: TilePart, { colOf, runEnd, firstCol, cellStart, lineStart }: Line): void {
  const { values: samplesA, offset: offsetA, stride: strideA } = tile.bands[0]!;
  const { values: samplesB, offset: offsetB, stride: strideB } = tile.bands[1]!;
  const missingA = noData[0]!;
  const missingB = noData[1]!;
  const count = cols * rows;
  let atA = (lineStart + fromCol) * strideA + offsetA;
  let atB = (lineStart + fromCol) * strideB + offsetB;
  for (let col = fromCol; col < toCol; ) {
    const cellCol = colOf[col - firstCol]!;
    const end = Math.min(toCol, firstCol + runEnd[col - firstCol]!);
    let sumA = 0;
    let sumB = 0;
    let pixels = 0;
    for (; col < end; col++, atA += strideA, atB += strideB) {
      const a = samplesA[atA]!;
      const b = samplesB[atB]!;
      if (a === missingA || b === missingB || a - a !== 0 || b - b !== 0) continue;
      sumA += a;
      sumB += b;
      pixels++;
    }
    if (cellCol < 0) continue;
    values[cellStart + cellCol]! += sumA;
    values[count + cellStart + cellCol]! += sumB;
    values[2 * count + cellStart + cellCol]! += pixels;
  }
}

function addLineOfMany(sums: SumTable, part: TilePart, { colOf, firstCol, cellStart, lineStart }: Line): void {
  const pixel = new Float64Array(sums.bands);
  for (let col = part.fromCol; col < part.toCol; col++) {
    const cellCol = colOf[col - firstCol]!;
    if (cellCol >= 0 && readPixel(part.tile, lineStart + col, { noData: part.noData, pixel })) addPixel(sums, cellStart + cellCol, { pixel, weight: 1 });
  }
}

/** Turned rasters and other map projections: every pixel centre is mapped. */
export function addByCentre(sums: SumTable, part: TilePart, map: PlaneMap): void {
  const { tile, fromCol, toCol, fromRow, toRow } = part;
  const count = Math.max(0, toCol - fromCol);
  const places = new Float64Array(2 * count);
  const pixel = new Float64Array(sums.bands);
  for (let row = fromRow; row < toRow; row++) {
    map.row({ u: fromCol + 0.5, v: row + 0.5, count }, places);
    const lineStart = (row - tile.firstRow) * tile.storedCols + fromCol - tile.firstCol;
    for (let at = 0; at < count; at++) {
      const cellCol = Math.floor(places[2 * at]!);
      const cellRow = Math.floor(places[2 * at + 1]!);
      if (cellCol < 0 || cellCol >= sums.cols || cellRow < 0 || cellRow >= sums.rows) continue;
      if (readPixel(tile, lineStart + at, { noData: part.noData, pixel })) addPixel(sums, cellRow * sums.cols + cellCol, { pixel, weight: 1 });
    }
  }
}

/** Reads all bands of one stored pixel; false when any of them has no data, NaN or infinity. */
export function readPixel({ bands }: PixelTile, stored: number, { noData, pixel }: { noData: readonly number[]; pixel: Float64Array }): boolean {
  for (let band = 0; band < bands.length; band++) {
    const { values, offset, stride } = bands[band]!;
    const sample = values[stored * stride + offset]!;
    if (sample === noData[band] || sample - sample !== 0) return false;
    pixel[band] = sample;
  }
  return true;
}

export function addPixel({ values, bands, cols, rows }: SumTable, cell: number, { pixel, weight }: { pixel: Float64Array; weight: number }): void {
  const count = cols * rows;
  for (let band = 0; band < bands; band++) values[band * count + cell]! += pixel[band]! * weight;
  values[bands * count + cell]! += weight;
}
