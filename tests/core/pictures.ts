import { gridOfOutline, type Grid } from '../../shared/analysis/grid.ts';

/** Labels typed as rows of digits, '.' for outside: `111 112`. */
export interface Picture {
  readonly labels: Uint8Array;
  readonly cols: number;
  readonly rows: number;
}

export function picture(text: string): Picture {
  const lines = text.trim().split(/\s+/);
  const labels = Uint8Array.from(lines.join(''), (sign) => (sign === '.' ? 0 : Number(sign)));
  return { labels, cols: lines[0]!.length, rows: lines.length };
}

/** The same way round, rows joined by a space. */
export function shown(labels: ArrayLike<number>, cols: number): string {
  const lines: string[] = [];
  for (let from = 0; from < labels.length; from += cols) {
    lines.push(Array.from({ length: cols }, (_, col) => labels[from + col]!).map((label) => (label === 0 ? '.' : String(label))).join(''));
  }
  return lines.join(' ');
}

/** Corner of all grids made here, in UTM zone 30 north; a multiple of every cell size used. */
export const CORNER = { x: 600_000, y: 4_700_000, epsg: 32630 } as const;

/** A rectangular block of full cells, corner in the north-west at CORNER. */
export function rectangleGrid(cols: number, rows: number, cellSizeM = 1): Grid {
  const [x, y, width, height] = [CORNER.x, CORNER.y, cols * cellSizeM, rows * cellSizeM];
  return gridOfOutline([[[[x, y], [x, y - height], [x + width, y - height], [x + width, y], [x, y]]]], CORNER.epsg, cellSizeM);
}

/** A rectangle of cells of which those marked '.' count as outside; its outline stays the rectangle. */
export function pictureGrid({ labels, cols, rows }: Picture, cellSizeM = 1): Grid {
  const inside = labels.map((label) => (label > 0 ? 1 : 0));
  return { ...rectangleGrid(cols, rows, cellSizeM), inside, share: Float32Array.from(inside) };
}
