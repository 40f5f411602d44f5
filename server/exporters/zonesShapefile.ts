import { zipSync } from 'fflate';
import { boundsOf } from '../../shared/geo/bounds.ts';
import type { PolygonLonLat } from '../../shared/geo/coordinates.ts';
import { closeRing, windForShapefile } from '../../shared/geo/rings.ts';
import type { ExportedZone, ZoneExport } from './zoneExport.ts';

/**
 * A zip with one shapefile of polygons (ESRI Shapefile Technical Description, July 1998): outer rings clockwise, WGS 84,
 * attributes in UTF-8 with the .cpg that says so.
 */
export function zonesShapefile(input: ZoneExport): Buffer {
  const shapes = input.zones.map(shapeBytes);
  const bounds = boundsOf(input.zones.flatMap((zone) => zone.polygonsLonLat.flat()));
  const files = { shp: mainFile(shapes, bounds), shx: indexFile(shapes, bounds), dbf: attributeFile(input), prj: Buffer.from(wgs84), cpg: Buffer.from('UTF-8') };
  // The format of zip entries cannot say a time before 1980 and knows no time zone.
  const mtime = new Date(Math.max(input.madeAt.getTime(), Date.UTC(1980, 0, 2)));
  return Buffer.from(zipSync(Object.fromEntries(Object.entries(files).map(([ending, bytes]) => [`zones.${ending}`, bytes])), { mtime }));
}

const wgs84 = 'GEOGCS["GCS_WGS_1984",DATUM["D_WGS_1984",SPHEROID["WGS_1984",6378137.0,298.257223563]],PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]]';
const polygonType = 5;
const headerBytes = 100;

type Box = readonly [number, number, number, number];

/** Content of one record: type, box, number of parts and points, first point of each part, points. */
function shapeBytes(zone: ExportedZone): Buffer {
  const rings = zone.polygonsLonLat.flatMap((polygon: PolygonLonLat) => windForShapefile(polygon.map(closeRing)));
  const points = rings.flat();
  const bytes = Buffer.alloc(44 + rings.length * 4 + points.length * 16);
  bytes.writeInt32LE(polygonType, 0);
  boundsOf(rings).forEach((value, index) => bytes.writeDoubleLE(value, 4 + index * 8));
  bytes.writeInt32LE(rings.length, 36);
  bytes.writeInt32LE(points.length, 40);
  let first = 0;
  rings.forEach((ring, part) => {
    bytes.writeInt32LE(first, 44 + part * 4);
    first += ring.length;
  });
  const at = 44 + rings.length * 4;
  points.forEach(([lon, lat], index) => {
    bytes.writeDoubleLE(lon, at + index * 16);
    bytes.writeDoubleLE(lat, at + index * 16 + 8);
  });
  return bytes;
}

/** Lengths and offsets are counted in words of two bytes. */
function header(lengthBytes: number, bounds: Box): Buffer {
  const bytes = Buffer.alloc(headerBytes);
  bytes.writeInt32BE(9994, 0);
  bytes.writeInt32BE(lengthBytes / 2, 24);
  bytes.writeInt32LE(1000, 28);
  bytes.writeInt32LE(polygonType, 32);
  bounds.forEach((value, index) => bytes.writeDoubleLE(value, 36 + index * 8));
  return bytes;
}

function mainFile(shapes: readonly Buffer[], bounds: Box): Buffer {
  const records = shapes.map((shape, index) => {
    const head = Buffer.alloc(8);
    head.writeInt32BE(index + 1, 0);
    head.writeInt32BE(shape.length / 2, 4);
    return Buffer.concat([head, shape]);
  });
  const body = Buffer.concat(records);
  return Buffer.concat([header(headerBytes + body.length, bounds), body]);
}

function indexFile(shapes: readonly Buffer[], bounds: Box): Buffer {
  const body = Buffer.alloc(shapes.length * 8);
  let offset = headerBytes;
  shapes.forEach((shape, index) => {
    body.writeInt32BE(offset / 2, index * 8);
    body.writeInt32BE(shape.length / 2, index * 8 + 4);
    offset += 8 + shape.length;
  });
  return Buffer.concat([header(headerBytes + body.length, bounds), body]);
}

interface Field {
  name: string;
  type: 'C' | 'N';
  decimals: number;
  width: number;
  values: string[];
}

const mostBytes = 254;

/** dBASE III table; texts as wide as the longest of them, numbers right-aligned. */
function attributeFile({ blockName, zones }: ZoneExport): Buffer {
  const fields: Field[] = [
    field('ZONE', 'N', zones.map((zone) => String(zone.number))),
    field('NAME', 'C', zones.map((zone) => zone.name)),
    field('BLOCK', 'C', zones.map(() => blockName)),
    field('AREA_HA', 'N', zones.map((zone) => (zone.areaM2 / 10_000).toFixed(4)), 4),
    field('VINES', 'N', zones.map((zone) => String(zone.vines))),
    field('MISSING', 'N', zones.map((zone) => String(zone.missing))),
  ];
  const recordBytes = 1 + fields.reduce((sum, { width }) => sum + width, 0);
  const head = Buffer.alloc(32 + fields.length * 32 + 1);
  head[0] = 3;
  head[1] = 100;
  head[2] = 1;
  head[3] = 1;
  head.writeUInt32LE(zones.length, 4);
  head.writeUInt16LE(head.length, 8);
  head.writeUInt16LE(recordBytes, 10);
  fields.forEach(({ name, type, width, decimals }, index) => {
    const at = 32 + index * 32;
    head.write(name, at, 'latin1');
    head.write(type, at + 11, 'latin1');
    head[at + 16] = width;
    head[at + 17] = decimals;
  });
  head[head.length - 1] = 0x0d;
  const records = zones.map((_zone, index) => Buffer.concat([Buffer.from(' '), ...fields.map((each) => padded(each, each.values[index]!))]));
  return Buffer.concat([head, ...records, Buffer.from([0x1a])]);
}

function field(name: string, type: Field['type'], values: string[], decimals = 0): Field {
  const cut = values.map((value) => shortened(value));
  return { name, type, decimals, values: cut, width: Math.max(1, ...cut.map((value) => Buffer.byteLength(value))) };
}

/** At most so many bytes as a field holds, never half a character. */
function shortened(value: string): string {
  let text = value;
  while (Buffer.byteLength(text) > mostBytes) text = [...text].slice(0, -1).join('');
  return text;
}

function padded({ type, width }: Field, value: string): Buffer {
  const bytes = Buffer.from(value, 'utf8');
  const gap = Buffer.alloc(width - bytes.length, ' ');
  return type === 'N' ? Buffer.concat([gap, bytes]) : Buffer.concat([bytes, gap]);
}
