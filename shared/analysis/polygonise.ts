/**
 * Zones as polygons, drawn from labels: borders are traced once, straightened once and cut by the block's outline, so that
 * zones and outline fit together without gaps or overlaps and the areas of the zones add up to the block's.
 * In: labels on a grid. Out: one multipolygon a zone, in metres and in degrees. Cost: cells plus border length.
 */
import type { LonLat, MultiPolygonLonLat, MultiPolygonXY, XY } from '../geo/coordinates.ts';
import { signedArea } from '../geo/rings.ts';
import { fromUtm } from '../geo/utm.ts';
import { assertCellCount, type Grid, type Labels } from './grid.ts';
import { cutByOutline, type MetricBorder, type Piece } from './polygoniseCut.ts';
import { withoutChips } from './polygoniseChips.ts';
import { EXTENSION, extendLabels, type ExtendedLabels } from './polygoniseExtend.ts';
import { ringOf, type Walk } from './polygoniseFaces.ts';
import { nestRings } from './polygoniseNest.ts';
import { traceBorders, type Border } from './polygoniseTrace.ts';
import { simplifyBorders } from './simplifyBorders.ts';

export interface ZonePolygons {
  readonly zone: number;
  readonly polygonsXY: MultiPolygonXY;
  /** Outer rings counter-clockwise (RFC 7946), eight decimals (about a millimetre), the same on both sides of a border. */
  readonly polygonsLonLat: MultiPolygonLonLat;
  /** Plane area in the grid's metres. */
  readonly areaM2: number;
}

export interface PolygoniseOptions {
  /** Corners that enclose less than this with their neighbours are straightened; in cells. */
  readonly simplifyCells?: number;
}

/**
 * One entry per zone that has ground, in order of zone number. A 100 m × 60 m block of two zones split at 40 m gives two
 * rectangles of 2400 and 3600 m², to the half square metre of the shift.
 */
export function polygonise(grid: Grid, labels: Labels, { simplifyCells = 2 }: PolygoniseOptions = {}): ZonePolygons[] {
  assertCellCount(grid, labels, 'The zoning');
  const extended = extendLabels(grid, labels);
  const traced = traceBorders(extended);
  const size = { width: 2 * extended.cols + 1, height: 2 * extended.rows + 1 };
  const borders = simplifyBorders(traced, { areaCells: simplifyCells, ...size });
  const outline = localOutline(grid);
  const shift = shiftOf(outline, grid.cellSizeM);
  const pieces = cutByOutline(borders.map((border) => toMetres(border, grid.cellSizeM, shift)), outline, grid.cellSizeM);
  const walks = withoutChips(pieces, grid.cellSizeM ** 2).map((walk) => (walk.zone === null ? { ...walk, zone: commonLabel(walk, grid, extended) } : walk));
  return zonesOf(walks, grid);
}

/**
 * A small shift of all borders, so that none passes through a corner of the outline or along an edge of it. Outlines drawn on
 * whole metres need some millimetres, more than the rounding of degrees; others next to nothing.
 */
function shiftOf(outline: readonly (readonly XY[])[], cellSizeM: number): XY {
  const isOnHalfCells = (axis: 0 | 1) => outline.some((ring) => ring.some((corner) => Math.abs(corner[axis] - (Math.round((2 * corner[axis]) / cellSizeM) * cellSizeM) / 2) < 0.002));
  return [isOnHalfCells(0) ? 0.0053 : 2.7e-5, isOnHalfCells(1) ? 0.0021 : 1.9e-5];
}

function toMetres({ left, right, points, isLoop }: Border, cellSizeM: number, shift: XY): MetricBorder {
  const line: XY[] = [];
  for (let at = 0; at < points.length; at += 2) {
    line.push([(points[at]! / 2 - EXTENSION) * cellSizeM + shift[0], (EXTENSION - points[at + 1]! / 2) * cellSizeM + shift[1]]);
  }
  if (isLoop) line.push(line[0]!);
  return { left, right, points: line, isLoop };
}

/** Rings relative to the grid's corner, without repeated points, the block to the left. */
function localOutline(grid: Grid): XY[][] {
  return grid.outlineXY.flatMap((rings) =>
    rings.map((ring, index) => {
      const local = ring.map(([x, y]): XY => [x - grid.x0, y - grid.y0]);
      const distinct = local.filter(([x, y], at) => at === 0 || x !== local[at - 1]![0] || y !== local[at - 1]![1]);
      return signedArea(distinct) > 0 === (index === 0) ? distinct : distinct.reverse();
    }),
  );
}

/** The label most often met along a walk that follows the outline only. */
function commonLabel(walk: Walk, grid: Grid, { labels, cols }: ExtendedLabels): number {
  const votes = new Map<number, number>();
  for (const [x, y] of ringOf(walk, ({ points }) => points)) {
    const cell = (EXTENSION + Math.floor(-y / grid.cellSizeM)) * cols + EXTENSION + Math.floor(x / grid.cellSizeM);
    const label = labels[cell] ?? 0;
    if (label > 0) votes.set(label, (votes.get(label) ?? 0) + 1);
  }
  return [...votes].sort((a, b) => b[1] - a[1] || a[0] - b[0])[0]?.[0] ?? 0;
}

function zonesOf(walks: readonly Walk[], grid: Grid): ZonePolygons[] {
  const degrees = new Map<Piece, readonly LonLat[]>();
  const inDegrees = (piece: Piece) => {
    const known = degrees.get(piece);
    if (known !== undefined) return known;
    const made = piece.points.map(([x, y]) => rounded(fromUtm([x + grid.x0, y + grid.y0], grid.epsg)));
    degrees.set(piece, made);
    return made;
  };
  const zones = [...new Set(walks.map(({ zone }) => zone!))].sort((a, b) => a - b);
  return zones.map((zone) => {
    const polygons = nestRings(walks.filter((walk) => walk.zone === zone));
    const areaM2 = polygons.flat().reduce((sum, { areaM2: ringArea }) => sum + ringArea, 0);
    return {
      zone,
      polygonsXY: polygons.map((rings) => rings.map(({ walk }) => ringOf(walk, ({ points }) => points).map(([x, y]): XY => [x + grid.x0, y + grid.y0]))),
      polygonsLonLat: polygons.map((rings) => rings.map(({ walk }) => withoutRepeats(ringOf(walk, inDegrees)))),
      areaM2,
    };
  });
}

function rounded([lon, lat]: LonLat): LonLat {
  return [Math.round(lon * 1e8) / 1e8, Math.round(lat * 1e8) / 1e8];
}

function withoutRepeats(ring: readonly LonLat[]): LonLat[] {
  return ring.filter(([lon, lat], at) => at === 0 || lon !== ring[at - 1]![0] || lat !== ring[at - 1]![1]);
}
