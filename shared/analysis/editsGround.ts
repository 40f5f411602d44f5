/**
 * Ground that an edit names, as cells: shapes drawn on the map, strips along rows, or cells one by one.
 * A cell belongs to a shape or strip when its centre does, so shapes that share an edge never claim a cell twice.
 */
import { boundsOf } from '../geo/bounds.ts';
import type { LonLat, MultiPolygonLonLat } from '../geo/coordinates.ts';
import { toUtm } from '../geo/utm.ts';
import { AnalysisError } from './analysisError.ts';
import { toCellRing, type Grid } from './grid.ts';

export type Ground =
  /** A lasso or any drawn shape; where it crosses itself, ground enclosed twice is left out (even–odd rule). */
  | { readonly shape: 'polygons'; readonly polygonsLonLat: MultiPolygonLonLat }
  /** Rows or parts of rows: each a line along the vines and the width that is the row's own, its spacing. */
  | { readonly shape: 'strips'; readonly strips: readonly Strip[] }
  /** Cell indexes of the grid, such as those of single vines. */
  | { readonly shape: 'cells'; readonly cells: readonly number[] };

export interface Strip {
  readonly lineLonLat: readonly LonLat[];
  readonly widthM: number;
}

/** Cell indexes, ascending, each once; cells outside the block included. Throws AnalysisError for a cell that is not there. */
export function cellsOfGround(grid: Grid, ground: Ground): number[] {
  if (ground.shape === 'polygons') return cellsInPolygons(grid, ground.polygonsLonLat);
  if (ground.shape === 'strips') return ascending(ground.strips.flatMap((strip) => cellsInStrip(grid, strip)));
  const missing = ground.cells.find((cell) => !Number.isInteger(cell) || cell < 0 || cell >= grid.share.length);
  if (missing !== undefined) throw new AnalysisError('edit-cell-unknown', `Cell ${missing} is not on this block's grid; reload the block and choose again.`);
  return ascending(ground.cells);
}

function ascending(cells: readonly number[]): number[] {
  return [...new Set(cells)].sort((a, b) => a - b);
}

/** Centres inside by the even–odd rule, row by row. */
function cellsInPolygons(grid: Grid, polygonsLonLat: MultiPolygonLonLat): number[] {
  const rings = polygonsLonLat.flat().map((ring) => toCellRing(ring.map((lonLat) => toUtm(lonLat, grid.epsg)), grid));
  const cells: number[] = [];
  for (let row = 0; row < grid.rows; row++) {
    const crossings = rings.flatMap((ring) => crossingsAt(ring, row + 0.5)).sort((a, b) => a - b);
    for (let at = 0; at + 1 < crossings.length; at += 2) {
      const end = Math.min(grid.cols, Math.ceil(crossings[at + 1]! - 0.5));
      for (let col = Math.max(0, Math.ceil(crossings[at]! - 0.5)); col < end; col++) cells.push(row * grid.cols + col);
    }
  }
  return cells;
}

function crossingsAt(ring: Float64Array, v: number): number[] {
  const found: number[] = [];
  for (let to = 0, from = ring.length - 2; to < ring.length; from = to, to += 2) {
    const [fromV, toV] = [ring[from + 1]!, ring[to + 1]!];
    if (fromV > v !== toV > v) found.push(ring[from]! + ((v - fromV) / (toV - fromV)) * (ring[to]! - ring[from]!));
  }
  return found;
}

/** Centres within half the width of the line and beside it, not beyond its ends. */
function cellsInStrip(grid: Grid, { lineLonLat, widthM }: Strip): number[] {
  const line = toCellRing(lineLonLat.map((lonLat) => toUtm(lonLat, grid.epsg)), grid);
  const half = widthM / 2 / grid.cellSizeM;
  const cells: number[] = [];
  for (let at = 0; at + 3 < line.length; at += 2) {
    const [au, av, bu, bv] = [line[at]!, line[at + 1]!, line[at + 2]!, line[at + 3]!];
    const length = Math.hypot(bu - au, bv - av);
    if (length === 0) continue;
    const [alongU, alongV] = [(bu - au) / length, (bv - av) / length];
    // At a bend the strip goes round the corner; at the ends of the line it is cut square.
    const before = at === 0 ? 0 : -half;
    const after = at + 4 >= line.length ? length : length + half;
    const [minU, minV, maxU, maxV] = boundsOf([[[au, av], [bu, bv]]]);
    for (let row = Math.max(0, Math.floor(minV - half)); row < Math.min(grid.rows, maxV + half); row++) {
      for (let col = Math.max(0, Math.floor(minU - half)); col < Math.min(grid.cols, maxU + half); col++) {
        const [du, dv] = [col + 0.5 - au, row + 0.5 - av];
        const along = du * alongU + dv * alongV;
        const beside = dv * alongU - du * alongV;
        const isAtBend = along < 0 || along > length;
        const isNear = isAtBend ? Math.min(Math.hypot(du, dv), Math.hypot(col + 0.5 - bu, row + 0.5 - bv)) <= half : beside >= -half && beside < half;
        if (along >= before && along <= after && isNear) cells.push(row * grid.cols + col);
      }
    }
  }
  return cells;
}
