import { boundsOf } from '../../../shared/geo/bounds.ts';
import type { LonLat } from '../../../shared/geo/coordinates.ts';
import { closeRing, windForGeoJson } from '../../../shared/geo/rings.ts';
import { pathsOf, type FeatureShape } from './featureLayer.ts';

/** Names and numbers of the kinds in well-known binary (OGC 06-103r4). */
export const geometryTypes = { point: 'POINT', lines: 'MULTILINESTRING', polygons: 'MULTIPOLYGON' } as const;
const [point, lineString, polygon, multiLineString, multiPolygon] = [1, 2, 3, 5, 6];

/** A shape as a GeoPackage keeps it (OGC 12-128r17, 2.1.3): header with envelope, then well-known binary, little-endian. Outer rings counter-clockwise. */
export function geometryBlob(shape: FeatureShape, srsId: number): Uint8Array {
  const [west, south, east, north] = boundsOf(pathsOf(shape));
  const head = Buffer.alloc(40);
  head.write('GP', 0, 'latin1');
  // Bit 0: little-endian; bits 1 to 3: an envelope of x and y.
  head.writeUInt8(0b0000_0011, 3);
  head.writeInt32LE(srsId, 4);
  [west, east, south, north].forEach((edge, at) => head.writeDoubleLE(edge, 8 + at * 8));
  return Buffer.concat([head, ...wellKnownBinary(shape)]);
}

function wellKnownBinary(shape: FeatureShape): Buffer[] {
  if (shape.kind === 'point') return [typed(point!), positions([shape.at])];
  if (shape.kind === 'lines') return [typed(multiLineString!), counted(shape.linesLonLat), ...shape.linesLonLat.flatMap((line) => [typed(lineString!), counted(line), positions(line)])];
  return [
    typed(multiPolygon!), counted(shape.polygonsLonLat),
    ...shape.polygonsLonLat.flatMap((rings) => [typed(polygon!), counted(rings), ...windForGeoJson(rings.map(closeRing)).flatMap((ring) => [counted(ring), positions(ring)])]),
  ];
}

function typed(type: number): Buffer {
  const bytes = Buffer.alloc(5);
  bytes.writeUInt8(1, 0);
  bytes.writeUInt32LE(type, 1);
  return bytes;
}

function counted(list: readonly unknown[]): Buffer {
  const bytes = Buffer.alloc(4);
  bytes.writeUInt32LE(list.length, 0);
  return bytes;
}

function positions(points: readonly LonLat[]): Buffer {
  const bytes = Buffer.alloc(16 * points.length);
  points.forEach(([lon, lat], at) => bytes.writeDoubleLE(lat, bytes.writeDoubleLE(lon, 16 * at)));
  return bytes;
}
