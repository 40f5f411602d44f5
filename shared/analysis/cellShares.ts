/**
 * Exact share of each cell's area that lies inside polygons, by accumulating signed trapezoids edge by edge.
 * In: rings in cell units (x to the east, y to the SOUTH, cell (col,row) is [col,col+1) × [row,row+1)).
 * Out: share per cell, 0…1, of a rectangular window. Cost: edges × cells crossed + one pass over the window.
 * Method: signed-area coverage accumulation, as in anti-aliased glyph rasterisers (common practice).
 */

/** A window of cells; `share[row * cols + col]` is the covered part of the cell (firstCol + col, firstRow + row). */
export interface CellShares {
  readonly firstCol: number;
  readonly firstRow: number;
  readonly cols: number;
  readonly rows: number;
  readonly share: Float64Array;
}

/** A ring's corners in cell units as pairs u, v, u, v …; closed or not, the last edge returns to the first corner. */
export type CellRing = Float64Array;

/**
 * Shares of the cells of a `cols` × `rows` raster covered by one polygon or several that do not overlap, each as outer
 * ring and holes of any winding. Polygons that overlap add up. The window holds only the cells near the polygons.
 */
export function cellShares(polygons: readonly (readonly CellRing[])[], cols: number, rows: number): CellShares {
  const window = windowOf(polygons, cols, rows);
  const stride = window.cols + 1;
  const area = new Float64Array(stride * window.rows);
  for (const rings of polygons) {
    rings.forEach((ring, index) => {
      const sign = (index === 0 ? 1 : -1) * Math.sign(ringArea(ring));
      if (sign !== 0) addRing(area, window, ring, sign);
    });
  }
  return { ...window, share: runningShare(area, window) };
}

interface Window {
  readonly firstCol: number;
  readonly firstRow: number;
  readonly cols: number;
  readonly rows: number;
}

function windowOf(polygons: readonly (readonly CellRing[])[], cols: number, rows: number): Window {
  let [minU, minV, maxU, maxV] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const rings of polygons) {
    const outer = rings[0] ?? new Float64Array(0);
    for (let at = 0; at < outer.length; at += 2) {
      minU = Math.min(minU, outer[at]!);
      maxU = Math.max(maxU, outer[at]!);
      minV = Math.min(minV, outer[at + 1]!);
      maxV = Math.max(maxV, outer[at + 1]!);
    }
  }
  const firstCol = Math.max(0, Math.floor(Math.min(minU, cols)));
  const firstRow = Math.max(0, Math.floor(Math.min(minV, rows)));
  return {
    firstCol,
    firstRow,
    cols: Math.max(0, Math.min(cols, Math.ceil(maxU)) - firstCol),
    rows: Math.max(0, Math.min(rows, Math.ceil(maxV)) - firstRow),
  };
}

/** Shoelace area, positive when the ring turns from east to south. */
function ringArea(ring: CellRing): number {
  let twice = 0;
  let [au, av] = [ring[ring.length - 2]! - ring[0]!, ring[ring.length - 1]! - ring[1]!];
  for (let at = 0; at < ring.length; at += 2) {
    const bu = ring[at]! - ring[0]!;
    const bv = ring[at + 1]! - ring[1]!;
    twice += au * bv - bu * av;
    au = bu;
    av = bv;
  }
  return twice / 2;
}

function addRing(area: Float64Array, window: Window, ring: CellRing, sign: number): void {
  let au = ring[ring.length - 2]! - window.firstCol;
  let av = ring[ring.length - 1]! - window.firstRow;
  for (let at = 0; at < ring.length; at += 2) {
    const bu = ring[at]! - window.firstCol;
    const bv = ring[at + 1]! - window.firstRow;
    if (av !== bv) addEdge(area, window, av < bv ? [au, av, bu, bv, -sign] : [bu, bv, au, av, sign]);
    au = bu;
    av = bv;
  }
}

/**
 * Adds what lies to the right of one downward edge: in each row crossed, the cells under the edge get their exact part
 * and the next cell the rest, so that a running sum along the row yields the cover. Left of the window counts as column 0.
 */
function addEdge(area: Float64Array, window: Window, [topU, topV, bottomU, bottomV, sign]: [number, number, number, number, number]): void {
  const { cols, rows } = window;
  const stride = cols + 1;
  const slope = (bottomU - topU) / (bottomV - topV);
  const lastRow = Math.min(rows - 1, Math.ceil(bottomV) - 1);
  for (let row = Math.max(0, Math.floor(topV)); row <= lastRow; row++) {
    const fromV = Math.max(topV, row);
    const toV = Math.min(bottomV, row + 1);
    const height = (toV - fromV) * sign;
    const u1 = topU + (fromV - topV) * slope;
    const u2 = topU + (toV - topV) * slope;
    const low = Math.min(u1, u2);
    const high = Math.max(u1, u2);
    const left = Math.min(Math.max(low, 0), cols);
    const right = Math.min(Math.max(high, 0), cols);
    const base = row * stride;
    if (low === high || left === right) {
      addSpan(area, base, Math.floor(left), height, left - Math.floor(left));
      continue;
    }
    // What a slanted edge has left or right of the window counts as an upright edge on that side of the window.
    const perU = height / (high - low);
    if (low < left) addSpan(area, base, 0, (left - low) * perU, 0);
    if (high > right) addSpan(area, base, cols, (high - right) * perU, 0);
    for (let col = Math.floor(left); col < right; col++) {
      const from = Math.max(left, col);
      const to = Math.min(right, col + 1);
      addSpan(area, base, col, (to - from) * perU, (from + to) / 2 - col);
    }
  }
}

/** An edge piece of the given signed height whose middle lies `offset` cells from the left side of the cell. */
function addSpan(area: Float64Array, base: number, col: number, height: number, offset: number): void {
  area[base + col]! += height * (1 - offset);
  if (offset > 0) area[base + col + 1]! += height * offset;
}

function runningShare(area: Float64Array, { cols, rows }: Window): Float64Array {
  const share = new Float64Array(cols * rows);
  for (let row = 0; row < rows; row++) {
    let sum = 0;
    for (let col = 0; col < cols; col++) {
      sum += area[row * (cols + 1) + col]!;
      share[row * cols + col] = sum;
    }
  }
  return share;
}
