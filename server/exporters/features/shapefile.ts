import { zipSync } from 'fflate';
import { boundsOf } from '../../../shared/geo/bounds.ts';
import type { Bounds } from '../../../shared/geo/coordinates.ts';
import { closeRing, windForShapefile } from '../../../shared/geo/rings.ts';
import type { Language } from '../../../shared/contracts/common.ts';
import { cutNotes } from './cutNotes.ts';
import { attributeFile } from './dbase.ts';
import { layerBounds, type FeatureLayer, type FeatureShape } from './featureLayer.ts';

/**
 * A zip with one shapefile (ESRI Shapefile Technical Description, July 1998): outer rings clockwise, WGS 84, attributes in
 * UTF-8 with the .cpg that says so. All features of a layer are of one kind. Texts that the table cannot hold stand whole in
 * a file beside it, in the language of who takes it away.
 */
export function shapefileOf(layer: FeatureLayer, language: Language): Buffer {
  const shapes = layer.features.map(({ shape }) => shapeBytes(shape));
  const about = { bounds: shapes.length === 0 ? ([0, 0, 0, 0] as const) : layerBounds(layer), type: shapeTypes[layer.features[0]?.shape.kind ?? 'point'] };
  const table = attributeFile(layer);
  const files = { shp: mainFile(shapes, about), shx: indexFile(shapes, about), dbf: table.bytes, prj: Buffer.from(wgs84), cpg: Buffer.from('UTF-8'), ...(table.cut.length > 0 ? { txt: Buffer.from(cutNotes(table.cut, language)) } : {}) };
  // The format of zip entries cannot say a time before 1980 and knows no time zone.
  const mtime = new Date(Math.max(layer.madeAt.getTime(), Date.UTC(1980, 0, 2)));
  return Buffer.from(zipSync(Object.fromEntries(Object.entries(files).map(([ending, bytes]) => [`${layer.name}.${ending}`, bytes])), { mtime }));
}

const wgs84 = 'GEOGCS["GCS_WGS_1984",DATUM["D_WGS_1984",SPHEROID["WGS_1984",6378137.0,298.257223563]],PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]]';
const shapeTypes = { point: 1, lines: 3, polygons: 5 } as const;
const headerBytes = 100;

interface AboutShapes {
  readonly bounds: Bounds;
  readonly type: number;
}

/** Content of one record: of a point its position; else type, box, number of parts and points, first point of each part, points. */
function shapeBytes(shape: FeatureShape): Buffer {
  if (shape.kind === 'point') {
    const bytes = Buffer.alloc(20);
    bytes.writeInt32LE(shapeTypes.point, 0);
    shape.at.forEach((value, axis) => bytes.writeDoubleLE(value, 4 + axis * 8));
    return bytes;
  }
  const parts = shape.kind === 'lines' ? shape.linesLonLat : shape.polygonsLonLat.flatMap((polygon) => windForShapefile(polygon.map(closeRing)));
  const points = parts.flat();
  const bytes = Buffer.alloc(44 + parts.length * 4 + points.length * 16);
  bytes.writeInt32LE(shapeTypes[shape.kind], 0);
  boundsOf(parts).forEach((value, index) => bytes.writeDoubleLE(value, 4 + index * 8));
  bytes.writeInt32LE(parts.length, 36);
  bytes.writeInt32LE(points.length, 40);
  let first = 0;
  parts.forEach((part, at) => {
    bytes.writeInt32LE(first, 44 + at * 4);
    first += part.length;
  });
  const at = 44 + parts.length * 4;
  points.forEach(([lon, lat], index) => {
    bytes.writeDoubleLE(lon, at + index * 16);
    bytes.writeDoubleLE(lat, at + index * 16 + 8);
  });
  return bytes;
}

/** Lengths and offsets are counted in words of two bytes. */
function header(lengthBytes: number, { bounds, type }: AboutShapes): Buffer {
  const bytes = Buffer.alloc(headerBytes);
  bytes.writeInt32BE(9994, 0);
  bytes.writeInt32BE(lengthBytes / 2, 24);
  bytes.writeInt32LE(1000, 28);
  bytes.writeInt32LE(type, 32);
  bounds.forEach((value, index) => bytes.writeDoubleLE(value, 36 + index * 8));
  return bytes;
}

function mainFile(shapes: readonly Buffer[], about: AboutShapes): Buffer {
  const records = shapes.map((shape, index) => {
    const head = Buffer.alloc(8);
    head.writeInt32BE(index + 1, 0);
    head.writeInt32BE(shape.length / 2, 4);
    return Buffer.concat([head, shape]);
  });
  const body = Buffer.concat(records);
  return Buffer.concat([header(headerBytes + body.length, about), body]);
}

function indexFile(shapes: readonly Buffer[], about: AboutShapes): Buffer {
  const body = Buffer.alloc(shapes.length * 8);
  let offset = headerBytes;
  shapes.forEach((shape, index) => {
    body.writeInt32BE(offset / 2, index * 8);
    body.writeInt32BE(shape.length / 2, index * 8 + 4);
    offset += 8 + shape.length;
  });
  return Buffer.concat([header(headerBytes + body.length, about), body]);
}
