import type { Feature, MultiPolygon, Polygon, Position } from 'geojson';
import { eachCellShare } from '../../../shared/analysis/cellShares.ts';
import { signedArea } from '../../../shared/geo/rings.ts';
import type { ImportWarning } from '../understood.ts';
import { isInside } from './placeHoles.ts';
import { areaHa } from './positions.ts';
import { findCrossings } from './selfCrossing.ts';

/** Pairs compared in full, and overlaps listed. */
const MOST_PAIRS = 400;
const LISTED = 5;
/** Smaller overlaps are borders drawn twice, not ground claimed twice. */
const LEAST_SHARE = 0.01;

interface Area {
  index: number;
  polygons: Position[][][];
  box: readonly [west: number, south: number, east: number, north: number];
  geometry: Polygon | MultiPolygon;
}

/** Cells along each side of the ground that two shapes may share, to see that they do not. */
const LOOK_CELLS = 256;

/**
 * Polygons of one layer that cover the same ground by more than a hundredth of the smaller one. Neighbours that share a
 * border, exactly or nearly, are told apart without computing an intersection, so a clean soil map costs almost nothing.
 */
export async function overlapWarnings(layer: string, features: readonly Feature[]): Promise<ImportWarning[]> {
  const areas = features.flatMap((feature, index): Area[] => areaOf(feature, index)).sort((a, b) => a.box[0] - b.box[0]);
  const warnings: ImportWarning[] = [];
  let compared = 0;
  let active: Area[] = [];
  for (const area of areas) {
    active = active.filter(({ box }) => box[2] > area.box[0]);
    for (const other of active) {
      if (other.box[1] >= area.box[3] || other.box[3] <= area.box[1] || !mayOverlap(area, other)) continue;
      if (++compared > MOST_PAIRS) return warnings;
      if (sharedAtMost(area, other) < LEAST_SHARE) continue;
      const shared = await sharedHa(area.geometry, other.geometry);
      if (shared < LEAST_SHARE * Math.min(areaHa(area.geometry), areaHa(other.geometry))) continue;
      const [first, second] = [Math.min(area.index, other.index) + 1, Math.max(area.index, other.index) + 1];
      warnings.push({ code: 'overlapping-shapes', text: `In "${layer}", shapes ${first} and ${second} cover the same ${shared.toFixed(4)} ha of ground.`, params: { layer, first, second, areaHa: Number(shared.toFixed(4)) } });
      if (warnings.length === LISTED) return warnings;
    }
    active.push(area);
  }
  return warnings;
}

function areaOf({ geometry }: Feature, index: number): Area[] {
  if (geometry.type !== 'Polygon' && geometry.type !== 'MultiPolygon') return [];
  const polygons = geometry.type === 'Polygon' ? [geometry.coordinates] : geometry.coordinates;
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const [outer] of polygons) {
    for (const [x, y] of outer!) {
      west = Math.min(west, x!);
      south = Math.min(south, y!);
      east = Math.max(east, x!);
      north = Math.max(north, y!);
    }
  }
  return [{ index, polygons, box: [west, south, east, north], geometry }];
}

/** Borders cross, or one lies inside the other. */
function mayOverlap(a: Area, b: Area): boolean {
  if (findCrossings([...a.polygons.flat(), ...b.polygons.flat()], 1).count > 0) return true;
  return isWithin(a, b) || isWithin(b, a);
}

/** Some corner lies inside a part and in none of its holes. */
function isWithin(inner: Area, outer: Area): boolean {
  const corners = inner.polygons.flatMap(([ring]) => ring!.slice(0, 20));
  return outer.polygons.some(([shell, ...holes]) => corners.some((corner) => isInside(corner, shell!) && !holes.some((hole) => isInside(corner, hole))));
}

/**
 * No more than this share of the smaller one is covered by both: of each cell of a fine raster over the ground where they may
 * meet, the smaller of the two covers (cellShares). A border that both have adds half a cell along it.
 */
function sharedAtMost(a: Area, b: Area): number {
  const [west, south] = [Math.max(a.box[0], b.box[0]), Math.max(a.box[1], b.box[1])];
  const [width, height] = [(Math.min(a.box[2], b.box[2]) - west) / LOOK_CELLS, (Math.min(a.box[3], b.box[3]) - south) / LOOK_CELLS];
  const raster = { cols: LOOK_CELLS, rows: LOOK_CELLS };
  const cells = (ring: readonly Position[]) => Float64Array.from(ring.flatMap(([x, y]) => [(x! - west) / width, (y! - south) / height]));
  const inCells = ({ polygons }: Area) => polygons.map((rings) => rings.map(cells));
  const cover = new Float32Array(LOOK_CELLS * LOOK_CELLS);
  eachCellShare(inCells(a), raster, (cell, share) => (cover[cell]! += share));
  let shared = 0;
  eachCellShare(inCells(b), raster, (cell, share) => (shared += Math.min(share, cover[cell]!)));
  return (shared * width * height) / Math.min(planeArea(a), planeArea(b));
}

/** In squared degrees. */
function planeArea({ polygons }: Area): number {
  return polygons.reduce((sum, rings) => sum + rings.reduce((area, ring, at) => area + (at === 0 ? 1 : -1) * Math.abs(signedArea(ring as [number, number][])), 0), 0);
}

async function sharedHa(a: Polygon | MultiPolygon, b: Polygon | MultiPolygon): Promise<number> {
  try {
    const { feature, featureCollection, intersect } = await import('@turf/turf');
    const shared = intersect(featureCollection<Polygon | MultiPolygon>([feature(a), feature(b)]));
    return shared === null ? 0 : areaHa(shared.geometry);
  } catch {
    return 0;
  }
}
