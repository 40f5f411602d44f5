import type { Geometry, MultiPolygon, Polygon, Position } from 'geojson';
import { polygonsArea } from '../../../shared/geo/rings.ts';
import { toUtm, utmEpsg } from '../../../shared/geo/utm.ts';

/** Planar area in the UTM zone of the shape's first corner. */
export function areaHa(geometry: Polygon | MultiPolygon): number {
  const polygons = geometry.type === 'Polygon' ? [geometry.coordinates] : geometry.coordinates;
  const epsg = utmEpsg([polygons[0]![0]![0]![0]!, polygons[0]![0]![0]![1]!]);
  const inMetres = polygons.map((rings) => rings.map((ring) => ring.map(([lon, lat]): [number, number] => [...toUtm([lon!, lat!], epsg)] as [number, number])));
  return polygonsArea(inMetres) / 1e4;
}

export function eachPosition(geometry: Geometry | null, take: (position: Position) => void): void {
  if (geometry === null || geometry.type === 'GeometryCollection') return;
  const walk = (part: unknown): void => {
    if (!Array.isArray(part)) return;
    if (typeof part[0] === 'number') take(part as Position);
    else for (const inner of part) walk(inner);
  };
  walk(geometry.coordinates);
}

/** The geometry with every position mapped; null when one has no place in the new frame. */
export function mapPositions<G extends Geometry>(geometry: G, map: (position: Position) => readonly [number, number] | null): G | null {
  if (geometry.type === 'GeometryCollection') return null;
  let failed = false;
  const walk = (part: unknown): unknown => {
    if (Array.isArray(part) && typeof part[0] === 'number') {
      const mapped = map(part as Position);
      if (mapped === null) failed = true;
      return mapped === null ? [NaN, NaN] : [mapped[0], mapped[1]];
    }
    return (part as unknown[]).map(walk);
  };
  const coordinates = walk(geometry.coordinates);
  return failed ? null : ({ ...geometry, coordinates } as G);
}
