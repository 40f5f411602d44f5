import type { Geometry } from 'geojson';
import type { LonLat } from '../../../shared/geo/coordinates.ts';
import { closeRing, windForGeoJson } from '../../../shared/geo/rings.ts';
import type { FeatureLayer, FeatureShape } from './featureLayer.ts';

/** Eight decimals of a degree are about a millimetre. */
const scale = 1e8;
const position = ([lon, lat]: LonLat) => [Math.round(lon * scale) / scale, Math.round(lat * scale) / scale];

/** A layer as GeoJSON (RFC 7946): longitude first, closed rings, outer rings counter-clockwise, no crs member. */
export function geoJsonOf({ fields, features }: FeatureLayer): Buffer {
  const written = features.map(({ values, shape }) => ({ type: 'Feature', properties: Object.fromEntries(fields.map(({ name }, at) => [name, values[at]])), geometry: geometryOf(shape) }));
  return Buffer.from(`${JSON.stringify({ type: 'FeatureCollection', features: written })}\n`, 'utf8');
}

export function geometryOf(shape: FeatureShape): Geometry {
  if (shape.kind === 'point') return { type: 'Point', coordinates: position(shape.at) };
  if (shape.kind === 'lines') return { type: 'MultiLineString', coordinates: shape.linesLonLat.map((line) => line.map(position)) };
  return { type: 'MultiPolygon', coordinates: shape.polygonsLonLat.map((polygon) => windForGeoJson(polygon.map(closeRing)).map((ring) => ring.map(position))) };
}
