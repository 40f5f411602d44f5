/**
 * Exact share of each cell's area that lies inside polygons, by accumulating signed trapezoids edge by edge.
 * In: rings in cell units (x to the east, y to the SOUTH, cell (col,row) is [col,col+1) × [row,row+1)).
 * Out: share per cell, 0…1, of a rectangular window. Cost: edges × cells crossed + one pass over the window.
 * Method: signed-area coverage accumulation, as in anti-aliased glyph rasterisers (common practice).
 */

/** A ring's corners in cell units as pairs u, v, u, v …; closed or not, the last edge returns to the first corner. */
export type CellRing = Float64Array;

/** The window of cells near some rings, and what they cover of each. One object serves many shapes, one after the other. */
export class CoverWindow {
  firstCol = 0;
  firstRow = 0;
  cols = 0;
  rows = 0;
  private rasterCols = 0;
  private area = new Float64Array(0);

  /** Begins anew around the outer rings, within a raster of the given size; false when they lie outside it. */
  open(outerRings: readonly CellRing[], rasterCols: number, rasterRows: number): boolean {
    let [minU, minV, maxU, maxV] = [Infinity, Infinity, -Infinity, -Infinity];
    for (const ring of outerRings) {
      for (let at = 0; at < ring.length; at += 2) {
        if (ring[at]! < minU) minU = ring[at]!;
        if (ring[at]! > maxU) maxU = ring[at]!;
        if (ring[at + 1]! < minV) minV = ring[at + 1]!;
        if (ring[at + 1]! > maxV) maxV = ring[at + 1]!;
      }
    }
    this.firstCol = Math.max(0, Math.floor(Math.min(minU, rasterCols)));
    this.firstRow = Math.max(0, Math.floor(Math.min(minV, rasterRows)));
    this.cols = Math.max(0, Math.min(rasterCols, Math.ceil(maxU)) - this.firstCol);
    this.rows = Math.max(0, Math.min(rasterRows, Math.ceil(maxV)) - this.firstRow);
    this.rasterCols = rasterCols;
    const wanted = (this.cols + 1) * this.rows;
    if (this.area.length < wanted) this.area = new Float64Array(wanted);
    else this.area.fill(0, 0, wanted);
    return this.cols > 0 && this.rows > 0;
  }

  /** Adds what a ring encloses, or takes it off with sign -1, whatever the ring's winding. */
  addRing(ring: CellRing, sign: 1 | -1): void {
    const turn = Math.sign(ringArea(ring)) * sign;
    if (turn === 0) return;
    for (let to = 0, from = ring.length - 2; to < ring.length; from = to, to += 2) {
      if (ring[from + 1]! < ring[to + 1]!) this.addEdge(ring, { top: from, bottom: to, sign: -turn });
      else if (ring[from + 1]! > ring[to + 1]!) this.addEdge(ring, { top: to, bottom: from, sign: turn });
    }
  }

  /** Calls `visit` with the raster's cell index and its share, for every cell that is covered. */
  eachShare(visit: (cell: number, share: number) => void): void {
    for (let row = 0; row < this.rows; row++) {
      const base = row * (this.cols + 1);
      const firstCell = (this.firstRow + row) * this.rasterCols + this.firstCol;
      let sum = 0;
      for (let col = 0; col < this.cols; col++) {
        sum += this.area[base + col]!;
        if (sum > 1e-9 || sum < -1e-9) visit(firstCell + col, sum);
      }
    }
  }

  /**
   * Adds what lies to the right of one downward edge: in each row crossed, the cells under the edge get their exact part
   * and the next cell the rest, so that a running sum along the row yields the cover.
   */
  private addEdge(ring: CellRing, { top, bottom, sign }: { top: number; bottom: number; sign: number }): void {
    const { cols, rows } = this;
    const topU = ring[top]! - this.firstCol;
    const topV = ring[top + 1]! - this.firstRow;
    const bottomV = ring[bottom + 1]! - this.firstRow;
    const slope = (ring[bottom]! - this.firstCol - topU) / (bottomV - topV);
    const endRow = Math.min(rows, Math.ceil(bottomV));
    for (let row = Math.max(0, Math.floor(topV)); row < endRow; row++) {
      const fromV = Math.max(topV, row);
      const toV = Math.min(bottomV, row + 1);
      const height = (toV - fromV) * sign;
      const u1 = topU + (fromV - topV) * slope;
      const u2 = topU + (toV - topV) * slope;
      const low = Math.min(u1, u2);
      const high = Math.max(u1, u2);
      const left = Math.min(Math.max(low, 0), cols);
      const right = Math.min(Math.max(high, 0), cols);
      const base = row * (cols + 1);
      if (low === high || left === right) {
        this.addSpan(base + Math.floor(left), height, left - Math.floor(left));
        continue;
      }
      // What a slanted edge has left or right of the window counts as an upright edge on that side of the window.
      const perU = height / (high - low);
      if (low < left) this.addSpan(base, (left - low) * perU, 0);
      if (high > right) this.addSpan(base + cols, (high - right) * perU, 0);
      for (let col = Math.floor(left); col < right; col++) {
        const from = Math.max(left, col);
        const to = Math.min(right, col + 1);
        this.addSpan(base + col, (to - from) * perU, (from + to) / 2 - col);
      }
    }
  }

  /** An edge piece of the given signed height whose middle lies `offset` cells from the left side of the cell. */
  private addSpan(at: number, height: number, offset: number): void {
    this.area[at]! += height * (1 - offset);
    if (offset > 0) this.area[at + 1]! += height * offset;
  }
}

/**
 * Calls `visit` with the index and the covered share of every cell of a `cols` × `rows` raster that one polygon or several
 * cover, each given as outer ring and holes of any winding. Ground that lies in two polygons counts twice.
 */
export function eachCellShare(polygons: readonly (readonly CellRing[])[], { cols, rows }: { cols: number; rows: number }, visit: (cell: number, share: number) => void): void {
  const cover = new CoverWindow();
  if (!cover.open(polygons.flatMap((rings) => rings.slice(0, 1)), cols, rows)) return;
  for (const rings of polygons) rings.forEach((ring, index) => cover.addRing(ring, index === 0 ? 1 : -1));
  cover.eachShare(visit);
}

/** Shoelace area, positive when the ring turns from east to south. */
function ringArea(ring: CellRing): number {
  const u0 = ring[0]!;
  const v0 = ring[1]!;
  let twice = 0;
  for (let to = 0, from = ring.length - 2; to < ring.length; from = to, to += 2) {
    twice += (ring[from]! - u0) * (ring[to + 1]! - v0) - (ring[to]! - u0) * (ring[from + 1]! - v0);
  }
  return twice / 2;
}
