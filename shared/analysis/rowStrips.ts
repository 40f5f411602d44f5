/**
 * Is a place on a vine row? Rows are lines; a strip of the same width lies along each. Segments are kept by square of
 * ground, so that a question costs a few distances. In: lines in metres. Out: a test for positions.
 */
import type { XY } from '../geo/coordinates.ts';

const SQUARE_M = 4;

/** `halfWidthM`: from the line to the edge of the strip. */
export function rowStrips(lines: readonly (readonly XY[])[], halfWidthM: number): (x: number, y: number) => boolean {
  const squares = new Map<number, number[]>();
  const segments: number[] = [];
  const key = (col: number, row: number) => col * 4_194_304 + row;
  for (const line of lines) {
    for (let point = 1; point < line.length; point++) {
      const [[x1, y1], [x2, y2]] = [line[point - 1]!, line[point]!];
      const at = segments.length;
      segments.push(x1, y1, x2, y2);
      const steps = Math.max(1, Math.ceil(Math.hypot(x2 - x1, y2 - y1) / (SQUARE_M / 2)));
      const touched = new Set<number>();
      for (let step = 0; step <= steps; step++) {
        const [x, y] = [x1 + ((x2 - x1) * step) / steps, y1 + ((y2 - y1) * step) / steps];
        // A square further on each side: no strip is wider than a square.
        for (let col = -1; col <= 1; col++) for (let row = -1; row <= 1; row++) touched.add(key(Math.floor(x / SQUARE_M) + col, Math.floor(y / SQUARE_M) + row));
      }
      for (const square of touched) {
        const held = squares.get(square);
        if (held === undefined) squares.set(square, [at]);
        else held.push(at);
      }
    }
  }
  return (x, y) => {
    const near = squares.get(key(Math.floor(x / SQUARE_M), Math.floor(y / SQUARE_M)));
    return near !== undefined && near.some((at) => squaredDistance(segments, at, x, y) <= halfWidthM * halfWidthM);
  };
}

function squaredDistance(segments: readonly number[], at: number, x: number, y: number): number {
  const [x1, y1] = [segments[at]!, segments[at + 1]!];
  const [dx, dy] = [segments[at + 2]! - x1, segments[at + 3]! - y1];
  const length = dx * dx + dy * dy;
  const along = length === 0 ? 0 : Math.min(1, Math.max(0, ((x - x1) * dx + (y - y1) * dy) / length));
  return (x - x1 - along * dx) ** 2 + (y - y1 - along * dy) ** 2;
}
