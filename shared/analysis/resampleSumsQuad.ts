/**
 * Adds pixels to every cell they overlap, by shared area, for turned rasters and other map projections: each pixel is a
 * four-cornered shape in the grid, cut by the cells exactly.
 */
import { CoverWindow } from './cellShares.ts';
import type { PlaneMap } from './resampleMap.ts';
import type { SumTable, TilePart } from './resampleSums.ts';
import { addPixel, readPixel } from './resampleSumsCentre.ts';

export function addByQuad(sums: SumTable, part: TilePart, map: PlaneMap): void {
  const { tile, fromCol, toCol, fromRow, toRow, noData } = part;
  const count = Math.max(0, toCol - fromCol);
  let north = new Float64Array(2 * (count + 1));
  let south = new Float64Array(2 * (count + 1));
  const pixel = new Float64Array(sums.bands);
  const quad = new Float64Array(8);
  const cover = new CoverWindow();
  map.row({ u: fromCol, v: fromRow, count: count + 1 }, south);
  for (let row = fromRow; row < toRow; row++) {
    [north, south] = [south, north];
    map.row({ u: fromCol, v: row + 1, count: count + 1 }, south);
    const lineStart = (row - tile.firstRow) * tile.storedCols + fromCol - tile.firstCol;
    for (let at = 0; at < count; at++) {
      quad.set([north[2 * at]!, north[2 * at + 1]!, north[2 * at + 2]!, north[2 * at + 3]!]);
      quad.set([south[2 * at + 2]!, south[2 * at + 3]!, south[2 * at]!, south[2 * at + 1]!], 4);
      if (!cover.open([quad], sums.cols, sums.rows) || !readPixel(tile, lineStart + at, { noData, pixel })) continue;
      cover.addRing(quad, 1);
      cover.eachShare((cell, weight) => addPixel(sums, cell, { pixel, weight }));
    }
  }
}
