import type { MultiPolygon } from 'geojson';
import { defineGrid } from '../../shared/analysis/grid.ts';
import type { MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import { fromUtm } from '../../shared/geo/utm.ts';

const partsOfBlock = ['north', 'northEast', 'east', 'southEast', 'south', 'southWest', 'west', 'northWest', 'middle'] as const;
export type PartOfBlock = (typeof partsOfBlock)[number];

/** Ground of a block that a finding is about. */
export interface MarkedGround {
  /** Rectangles of marked cells. */
  readonly geometry: MultiPolygon;
  readonly areaM2: number;
  /** Of the block's area, 0…1. */
  readonly share: number;
  /** Where in the block most of it lies. */
  readonly part: PartOfBlock;
}

/** From this share of half the block's size the middle of the marks lies to one side. */
const oneSided = 0.2;

/** The cells whose bit is set, as ground; null when none is or the marks belong to another outline. Cost: cells. */
export function markedGround(block: { boundary: { coordinates: unknown }; cellSizeM: number }, marks: Uint8Array, bit: number): MarkedGround | null {
  const grid = defineGrid(block.boundary.coordinates as MultiPolygonLonLat, block.cellSizeM);
  if (marks.length !== grid.cols * grid.rows) return null;
  const isMarked = (cell: number) => ((marks[cell]! >> bit) & 1) === 1;
  const [own, all] = [weightedMiddle(grid, isMarked), weightedMiddle(grid, () => true)];
  if (own.area === 0) return null;
  const [east, south] = [(2 * (own.col - all.col)) / grid.cols, (2 * (own.row - all.row)) / grid.rows];
  const corner = (col: number, row: number): [number, number] => {
    const [lon, lat] = fromUtm([grid.x0 + col * grid.cellSizeM, grid.y0 - row * grid.cellSizeM], grid.epsg);
    return [lon, lat];
  };
  const coordinates = rectangles(grid, isMarked).map(({ from, to, top, bottom }) => [[corner(from, top), corner(from, bottom), corner(to, bottom), corner(to, top), corner(from, top)]]);
  return { geometry: { type: 'MultiPolygon', coordinates }, areaM2: own.area * grid.cellSizeM ** 2, share: own.area / all.area, part: partOf(east, -south) };
}

interface Shares {
  readonly cols: number;
  readonly rows: number;
  readonly share: ArrayLike<number>;
}

/** Area in cells and middle of the block's chosen cells. */
function weightedMiddle({ share, cols }: Shares, isChosen: (cell: number) => boolean): { area: number; col: number; row: number } {
  let [area, right, down] = [0, 0, 0];
  for (let cell = 0; cell < share.length; cell++) {
    if (!isChosen(cell)) continue;
    area += share[cell]!;
    right += share[cell]! * (cell % cols);
    down += share[cell]! * Math.floor(cell / cols);
  }
  return { area, col: right / area, row: down / area };
}

interface Rectangle {
  from: number;
  to: number;
  top: number;
  bottom: number;
}

/** Runs of marked cells, one below the other joined where they are equally long. */
function rectangles({ cols, rows }: Shares, isMarked: (cell: number) => boolean): Rectangle[] {
  const done: Rectangle[] = [];
  let above = new Map<number, Rectangle>();
  for (let row = 0; row < rows; row++) {
    const here = new Map<number, Rectangle>();
    for (let col = 0; col < cols; col++) {
      if (!isMarked(row * cols + col)) continue;
      const from = col;
      while (col < cols && isMarked(row * cols + col)) col += 1;
      const same = above.get(from);
      const run = same?.to === col ? same : { from, to: col, top: row, bottom: row };
      run.bottom = row + 1;
      if (run !== same) done.push(run);
      here.set(from, run);
    }
    above = here;
  }
  return done;
}

function partOf(east: number, north: number): PartOfBlock {
  if (Math.hypot(east, north) < oneSided) return 'middle';
  const eighth = Math.round((Math.atan2(east, north) * 4) / Math.PI);
  return partsOfBlock[(eighth + 8) % 8]!;
}
