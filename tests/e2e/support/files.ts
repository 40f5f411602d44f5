import { zipSync } from 'fflate';
import { makeGround } from '../../../server/demo/ground.ts';
import { frameOf } from '../../../server/demo/layerFiles.ts';
import { placeOn } from '../../../server/demo/demoPlace.ts';
import { geoTiffBytes } from '../../../server/exporters/geoTiffBytes.ts';
import { randomNormal, seededRandom } from '../../../shared/analysis/random.ts';
import { fromUtm } from '../../../shared/geo/utm.ts';

/** Where the demo estate lies on the day of the test. */
export const place = placeOn(new Date().toISOString().slice(0, 10));

export interface UploadFile {
  name: string;
  mimeType: string;
  buffer: Buffer;
}

/** A new field of 150 m by 120 m east of the demo's blocks; its western half is weak, its eastern half strong. */
export const field = { west: 1180, south: 520, width: 150, height: 120 };

export function corner(x: number, y: number): [number, number] {
  const { anchor } = frameOf(place);
  const [lon, lat] = fromUtm([anchor[0] + x, anchor[1] + y], place.epsg);
  return [Number(lon.toFixed(8)), Number(lat.toFixed(8))];
}

export function outlineFile(): UploadFile {
  const { west, south, width, height } = field;
  const ring = [corner(west, south), corner(west + width, south), corner(west + width, south + height), corner(west, south + height), corner(west, south)];
  const collection = { type: 'FeatureCollection', features: [{ type: 'Feature', properties: { name: 'Gate Field' }, geometry: { type: 'Polygon', coordinates: [ring] } }] };
  return { name: 'gate-field.geojson', mimeType: 'application/geo+json', buffer: Buffer.from(JSON.stringify(collection)) };
}

/** Red and near infrared at one metre over the field and 10 m around it. */
export function vigourFile(): UploadFile {
  const { width, height, originX, originY } = frame(1);
  const random = seededRandom(5);
  const red = new Uint16Array(width * height);
  const nearInfrared = new Uint16Array(width * height);
  for (let row = 0; row < height; row++) {
    for (let col = 0; col < width; col++) {
      const strong = col - 10 > field.width / 2 + 6 * Math.sin(row / 14);
      red[row * width + col] = 1500 - (strong ? 650 : 0) + 60 * randomNormal(random);
      nearInfrared[row * width + col] = 3000 + (strong ? 1500 : 0) + 110 * randomNormal(random);
    }
  }
  return { name: 'gate-vigour.tif', mimeType: 'image/tiff', buffer: geoTiffBytes({ width, height, bands: [red, nearInfrared], epsg: place.epsg, originX, originY, pixelSize: 1, noData: 0 }) };
}

export function elevationFile(): UploadFile {
  const { width, height, originX, originY } = frame(2);
  const ground = makeGround(7, place);
  const metres = Float32Array.from({ length: width * height }, (_, pixel) => ground.elevationM(field.west - 10 + (pixel % width) * 2, field.south + field.height + 10 - Math.floor(pixel / width) * 2));
  return { name: 'gate-elevation.tif', mimeType: 'image/tiff', buffer: geoTiffBytes({ width, height, bands: [metres], epsg: place.epsg, originX, originY, pixelSize: 2, noData: -9999 }) };
}

function frame(pixel: number): { width: number; height: number; originX: number; originY: number } {
  const { anchor } = frameOf(place);
  return { width: (field.width + 20) / pixel, height: (field.height + 20) / pixel, originX: anchor[0] + field.west - 10, originY: anchor[1] + field.south + field.height + 10 };
}

const wgs84 = 'GEOGCS["WGS 84",DATUM["WGS_1984",SPHEROID["WGS 84",6378137,298.257223563]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433]]';

/** Two soil polygons with the water they hold, as a zipped shapefile written by hand (ESRI white paper 1998). */
export function soilZip(): UploadFile {
  const { west, south, width, height } = field;
  const middle = west + width * 0.45;
  const shapes = [rectangle(west - 15, south - 15, middle, south + height + 15), rectangle(middle, south - 15, west + width + 15, south + height + 15)];
  const { shp, shx } = shapeFiles(shapes);
  const dbf = attributeTable([62, 148]);
  const zip = zipSync({ 'soil.shp': shp, 'soil.shx': shx, 'soil.dbf': dbf, 'soil.prj': Buffer.from(wgs84) });
  return { name: 'gate-soil.zip', mimeType: 'application/zip', buffer: Buffer.from(zip) };
}

/** Clockwise, as shapefiles want outer rings. */
function rectangle(west: number, south: number, east: number, north: number): [number, number][] {
  return [corner(west, south), corner(west, north), corner(east, north), corner(east, south), corner(west, south)];
}

function shapeFiles(rings: [number, number][][]): { shp: Buffer; shx: Buffer } {
  const records = rings.map((ring) => polygonRecord(ring));
  const all = rings.flat();
  const header = (length: number) => {
    const bytes = Buffer.alloc(100);
    bytes.writeInt32BE(9994, 0);
    bytes.writeInt32BE(length / 2, 24);
    bytes.writeInt32LE(1000, 28);
    bytes.writeInt32LE(5, 32);
    [Math.min(...all.map(([x]) => x)), Math.min(...all.map(([, y]) => y)), Math.max(...all.map(([x]) => x)), Math.max(...all.map(([, y]) => y))].forEach((value, index) => bytes.writeDoubleLE(value, 36 + 8 * index));
    return bytes;
  };
  const numbered = records.map((record, index) => {
    const head = Buffer.alloc(8);
    head.writeInt32BE(index + 1, 0);
    head.writeInt32BE(record.length / 2, 4);
    return Buffer.concat([head, record]);
  });
  let offset = 100;
  const index = numbered.map((record) => {
    const entry = Buffer.alloc(8);
    entry.writeInt32BE(offset / 2, 0);
    entry.writeInt32BE((record.length - 8) / 2, 4);
    offset += record.length;
    return entry;
  });
  return { shp: Buffer.concat([header(offset), ...numbered]), shx: Buffer.concat([header(100 + 8 * index.length), ...index]) };
}

function polygonRecord(ring: [number, number][]): Buffer {
  const bytes = Buffer.alloc(48 + 16 * ring.length);
  bytes.writeInt32LE(5, 0);
  [Math.min(...ring.map(([x]) => x)), Math.min(...ring.map(([, y]) => y)), Math.max(...ring.map(([x]) => x)), Math.max(...ring.map(([, y]) => y))].forEach((value, index) => bytes.writeDoubleLE(value, 4 + 8 * index));
  bytes.writeInt32LE(1, 36);
  bytes.writeInt32LE(ring.length, 40);
  bytes.writeInt32LE(0, 44);
  ring.forEach(([x, y], index) => {
    bytes.writeDoubleLE(x, 48 + 16 * index);
    bytes.writeDoubleLE(y, 56 + 16 * index);
  });
  return bytes;
}

/** dBASE III table with one numeric field AWC_MM. */
function attributeTable(values: number[]): Buffer {
  const header = Buffer.alloc(32 + 32 + 1);
  header[0] = 3;
  header.writeUInt32LE(values.length, 4);
  header.writeUInt16LE(header.length, 8);
  header.writeUInt16LE(1 + 10, 10);
  header.write('AWC_MM', 32, 'latin1');
  header.write('N', 32 + 11, 'latin1');
  header[32 + 16] = 10;
  header[header.length - 1] = 0x0d;
  return Buffer.concat([header, ...values.map((value) => Buffer.from(` ${String(value).padStart(10)}`)), Buffer.from([0x1a])]);
}
