import type { Polygon } from 'geojson';
import { fromUtm } from '../../../shared/geo/utm.ts';

/** A field that exists nowhere in particular: UTM zone 30 north, so that a rectangle in metres is one on the grid. */
export const place = { epsg: 32630, x: 598_400, y: 4_707_000 } as const;

/** Positions in metres from the place, as longitude and latitude. */
export function lonLatAt(x: number, y: number): [number, number] {
  const [lon, lat] = fromUtm([place.x + x, place.y + y], place.epsg);
  return [lon, lat];
}

/** A closed outline from corners in metres. */
export function outline(corners: readonly (readonly [number, number])[]): Polygon {
  const ring = corners.map(([x, y]) => lonLatAt(x, y));
  return { type: 'Polygon', coordinates: [[...ring, ring[0]!]] };
}

/** A rectangle with its south-west corner at (x, y). */
export function rectangle({ x = 0, y = 0, width = 100, height = 60 }: { x?: number; y?: number; width?: number; height?: number } = {}): Polygon {
  return outline([[x, y], [x + width, y], [x + width, y + height], [x, y + height]]);
}
