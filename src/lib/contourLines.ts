import type { HeightGrid } from './reliefPicture.ts';

/** Contours by marching squares (Lorensen & Cline 1987, in the plane), segments joined into lines. */

export interface ContourLine {
  readonly heightM: number;
  /** Column and row of cell centres, fractions between them. */
  readonly points: readonly (readonly [column: number, row: number])[];
}

type Point = [number, number];

/** Lines at each multiple of the step. Cells without a height break the line. */
export function contourLines(grid: HeightGrid, stepM: number): ContourLine[] {
  let [low, high] = [Infinity, -Infinity];
  for (let cell = 0; cell < grid.columns * grid.rows; cell++) {
    const height = grid.cells[cell]!;
    if (height < low) low = height;
    if (height > high) high = height;
  }
  const lines: ContourLine[] = [];
  for (let heightM = Math.ceil(low / stepM) * stepM; heightM <= high; heightM += stepM) {
    for (const points of joined(segmentsAt(grid, heightM))) lines.push({ heightM, points });
  }
  return lines;
}

/** Edges crossed for each of the sixteen corner patterns: 0 top, 1 right, 2 bottom, 3 left. Saddles are cut both ways the same. */
const crossings: readonly (readonly (readonly [number, number])[])[] = [
  [], [[3, 2]], [[2, 1]], [[3, 1]], [[0, 1]], [[3, 0], [2, 1]], [[0, 2]], [[3, 0]],
  [[3, 0]], [[0, 2]], [[0, 1], [3, 2]], [[0, 1]], [[3, 1]], [[2, 1]], [[3, 2]], [],
];

function segmentsAt({ cells, columns, rows }: HeightGrid, heightM: number): [Point, Point][] {
  const segments: [Point, Point][] = [];
  for (let row = 0; row < rows - 1; row++) {
    for (let column = 0; column < columns - 1; column++) {
      const corner = row * columns + column;
      const [nw, ne, sw, se] = [cells[corner]!, cells[corner + 1]!, cells[corner + columns]!, cells[corner + columns + 1]!];
      if (Number.isNaN(nw + ne + sw + se)) continue;
      const pattern = (sw >= heightM ? 1 : 0) + (se >= heightM ? 2 : 0) + (ne >= heightM ? 4 : 0) + (nw >= heightM ? 8 : 0);
      const between = (one: number, other: number) => (one === other ? 0.5 : (heightM - one) / (other - one));
      const edge = (side: number): Point => {
        if (side === 0) return [column + between(nw, ne), row];
        if (side === 1) return [column + 1, row + between(ne, se)];
        return side === 2 ? [column + between(sw, se), row + 1] : [column, row + between(nw, sw)];
      };
      for (const [from, to] of crossings[pattern]!) segments.push([edge(from), edge(to)]);
    }
  }
  return segments;
}

const key = ([x, y]: Point) => `${x.toFixed(6)},${y.toFixed(6)}`;

/** Chains segments that share an end. */
function joined(segments: readonly [Point, Point][]): Point[][] {
  const byEnd = new Map<string, number[]>();
  segments.forEach((segment, index) => segment.forEach((end) => byEnd.set(key(end), [...(byEnd.get(key(end)) ?? []), index])));
  const used = new Uint8Array(segments.length);
  const grow = (line: Point[]): void => {
    for (;;) {
      const end = line.at(-1)!;
      const next = byEnd.get(key(end))?.find((index) => used[index] === 0);
      if (next === undefined) return;
      used[next] = 1;
      const [one, other] = segments[next]!;
      line.push(key(one) === key(end) ? other : one);
    }
  };
  const lines: Point[][] = [];
  segments.forEach(([one, other], index) => {
    if (used[index] === 1) return;
    used[index] = 1;
    const line: Point[] = [one, other];
    grow(line);
    line.reverse();
    grow(line);
    lines.push(line);
  });
  return lines;
}
