import type { Geometry } from 'geojson';
import { raw, type RawBuilder } from 'objection';

/** GeoJSON geometry as a value for a PostGIS column of WGS 84; polygons become multipolygons. */
export function fromGeoJson(geometry: Geometry): RawBuilder {
  const expression = 'ST_SetSRID(ST_GeomFromGeoJSON(?), 4326)';
  const multi = geometry.type === 'Polygon' || geometry.type === 'LineString';
  return raw(multi ? `ST_Multi(${expression})` : expression, JSON.stringify(geometry));
}

/** A geometry column read back as a GeoJSON object. Without this PostGIS answers hexadecimal text. */
export function asGeoJson(column: string, decimals = 8): RawBuilder {
  return raw('ST_AsGeoJSON(??, ?)::json', column, decimals);
}
