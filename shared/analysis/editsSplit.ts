/**
 * A zone cut in two by a drawn line. Only the patches that the line passes through are cut; in those the line is taken to go
 * on straight at both ends, so it need not be drawn out to the last cell. Cost: cells of those patches × line segments.
 */
import type { LonLat } from '../geo/coordinates.ts';
import { toUtm } from '../geo/utm.ts';
import { AnalysisError } from './analysisError.ts';
import { toCellRing, type Grid, type Labels } from './grid.ts';
import { findPatches } from './sievePatches.ts';

/** Cells of the part that gets the new number: the smaller one, or the right-hand one of two equal parts. */
export function splitCells(grid: Grid, labels: Labels, { zone, lineLonLat, alongRow = null }: { zone: number; lineLonLat: readonly LonLat[]; /** The row that the line runs beside, by its name. */ alongRow?: string | null }): number[] {
  const line = toCellRing(lineLonLat.map((lonLat) => toUtm(lonLat, grid.epsg)), grid);
  const own = labels.map((label) => (label === zone ? 1 : 0));
  const { patchOf } = findPatches(own, grid.cols, 8);
  const met = patchesUnder(line, grid, patchOf);
  const longLine = drawnOut(line, grid.cols + grid.rows);
  const sides: [left: number[], right: number[]] = [[], []];
  for (let cell = 0; cell < own.length; cell++) {
    if (own[cell] === 0 || !met.has(patchOf[cell]!)) continue;
    sides[isLeft(longLine, (cell % grid.cols) + 0.5, Math.floor(cell / grid.cols) + 0.5) ? 0 : 1].push(cell);
  }
  const [left, right] = sides;
  if (left.length === 0 || right.length === 0) {
    if (alongRow !== null) throw new AnalysisError('edit-row-misses', `All of zone ${zone} lies on one side of row ${alongRow}; choose a row with ground of the zone on both sides.`);
    throw new AnalysisError('edit-line-misses', `The line does not cut zone ${zone} in two; draw it across the zone.`);
  }
  return left.length < right.length ? left : right;
}

/** Patches under the drawn line, looked at every quarter of a cell. */
function patchesUnder(line: Float64Array, grid: Grid, patchOf: Int32Array): Set<number> {
  const met = new Set<number>();
  for (let at = 0; at + 3 < line.length; at += 2) {
    const steps = Math.max(1, Math.ceil(4 * Math.hypot(line[at + 2]! - line[at]!, line[at + 3]! - line[at + 1]!)));
    for (let step = 0; step <= steps; step++) {
      const col = Math.floor(line[at]! + ((line[at + 2]! - line[at]!) * step) / steps);
      const row = Math.floor(line[at + 1]! + ((line[at + 3]! - line[at + 1]!) * step) / steps);
      if (col < 0 || col >= grid.cols || row < 0 || row >= grid.rows) continue;
      const patch = patchOf[row * grid.cols + col]!;
      if (patch !== -1) met.add(patch);
    }
  }
  return met;
}

/** The line with its first and last stretch lengthened; repeated points left out. */
function drawnOut(line: Float64Array, by: number): Float64Array {
  const distinct: number[] = [];
  for (let at = 0; at < line.length; at += 2) {
    const count = distinct.length;
    if (count === 0 || line[at] !== distinct[count - 2] || line[at + 1] !== distinct[count - 1]) distinct.push(line[at]!, line[at + 1]!);
  }
  if (distinct.length < 4) throw new AnalysisError('edit-line-short', 'A line needs two different points; draw it across the zone.');
  const out = Float64Array.from(distinct);
  lengthen(out, { end: 0, inner: 2, by });
  lengthen(out, { end: out.length - 2, inner: out.length - 4, by });
  return out;
}

function lengthen(line: Float64Array, { end, inner, by }: { end: number; inner: number; by: number }): void {
  const [du, dv] = [line[end]! - line[inner]!, line[end + 1]! - line[inner + 1]!];
  const length = Math.hypot(du, dv);
  line[end]! += (du / length) * by;
  line[end + 1]! += (dv / length) * by;
}

/**
 * Side of the nearest stretch of the line, looking along it with north up. Beside a bend two stretches are equally near; the
 * one whose own line lies farther off decides.
 */
function isLeft(line: Float64Array, u: number, v: number): boolean {
  let nearest = Infinity;
  let offset = 0;
  for (let at = 0; at + 3 < line.length; at += 2) {
    const [du, dv] = [line[at + 2]! - line[at]!, line[at + 3]! - line[at + 1]!];
    const square = du * du + dv * dv;
    const part = Math.min(1, Math.max(0, ((u - line[at]!) * du + (v - line[at + 1]!) * dv) / square));
    const distance = Math.hypot(u - line[at]! - part * du, v - line[at + 1]! - part * dv);
    // v points south, so a positive turn is to the right.
    const side = (du * (v - line[at + 1]!) - dv * (u - line[at]!)) / Math.sqrt(square);
    if (distance < nearest - 1e-9 || (distance < nearest + 1e-9 && Math.abs(side) > Math.abs(offset))) {
      nearest = Math.min(nearest, distance);
      offset = side;
    }
  }
  return offset < 0;
}
