import type { Geometry, Position } from 'geojson';
import { signedArea } from '../../../shared/geo/rings.ts';

/**
 * A shapefile lists all rings of a record side by side, and the parser gives a hole to the smallest part whose box holds
 * it. Where parts bend around each other that can be the wrong one: each hole is moved to the smallest part that it
 * really lies in. A hole in no part is a part of its own that was wound the wrong way.
 */
export function placeHoles(geometry: Geometry): Geometry {
  if (geometry.type !== 'MultiPolygon' || geometry.coordinates.every((rings) => rings.length === 1)) return geometry;
  const parts = geometry.coordinates.map((rings) => [rings[0]!]);
  for (const hole of geometry.coordinates.flatMap((rings) => rings.slice(1))) {
    const homes = parts.filter(([outer]) => isInside(hole[0]!, outer!));
    const home = homes.reduce<Position[][] | null>((best, part) => (best === null || area(part[0]!) < area(best[0]!) ? part : best), null);
    if (home === null) parts.push([hole]);
    else home.push(hole);
  }
  return { type: 'MultiPolygon', coordinates: parts };
}

function area(ring: Position[]): number {
  return Math.abs(signedArea(ring as [number, number][]));
}

/** Even-odd rule along a ray to the east. */
export function isInside([x, y]: Position, ring: readonly Position[]): boolean {
  let inside = false;
  for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
    const [ax, ay] = ring[i]! as [number, number];
    const [bx, by] = ring[j]! as [number, number];
    if (ay > y! !== by > y! && x! < ((bx - ax) * (y! - ay)) / (by - ay) + ax) inside = !inside;
  }
  return inside;
}
