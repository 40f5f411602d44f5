import { deflateSync } from 'node:zlib';
import { xmlText } from './features/xmlText.ts';

type Samples = Uint8Array | Uint16Array | Float32Array;

export interface GeoTiffInput {
  width: number;
  height: number;
  /** One array a band, row by row from the north; all of one type. */
  bands: readonly Samples[];
  epsg: number;
  /** Outer corner of the north-west pixel, in the unit of the reference system. */
  originX: number;
  originY: number;
  pixelSize: number;
  noData?: number;
  /** Free text in the description tag. */
  description?: string;
  /** Name and unit of each band, in the metadata tag that GDAL reads. */
  bandNames?: readonly { name: string; unit: string }[];
}

const rowsPerStrip = 64;

/** Bytes of a little-endian GeoTIFF 1.1 (OGC 19-008r4): pixel-interleaved strips, Deflate, PixelIsArea, projected system by EPSG code. */
export function geoTiffBytes(input: GeoTiffInput): Buffer {
  const strips = stripsOf(input);
  const first = input.bands[0]!;
  const bits = first.BYTES_PER_ELEMENT * 8;
  const format = first instanceof Float32Array ? 3 : 1;
  const count = input.bands.length;
  const geoKeys = [1, 1, 1, 3, 1024, 0, 1, 1, 1025, 0, 1, 1, 3072, 0, 1, input.epsg];
  const headerBytes = 8;
  let offset = headerBytes;
  const offsets = strips.map((strip) => {
    const at = offset;
    offset += strip.length + (strip.length % 2);
    return at;
  });
  const tags: Tag[] = [
    short(256, [input.width]),
    short(257, [input.height]),
    short(258, Array<number>(count).fill(bits)),
    short(259, [8]),
    short(262, [1]),
    ascii(270, input.description ?? ''),
    long(273, offsets),
    short(277, [count]),
    short(278, [rowsPerStrip]),
    long(279, strips.map((strip) => strip.length)),
    short(284, [1]),
    ...(count > 1 ? [short(338, Array<number>(count - 1).fill(0))] : []),
    short(339, Array<number>(count).fill(format)),
    double(33550, [input.pixelSize, input.pixelSize, 0]),
    double(33922, [0, 0, 0, input.originX, input.originY, 0]),
    short(34735, geoKeys),
    ...(input.bandNames === undefined ? [] : [ascii(42112, bandMetadata(input.bandNames))]),
    ...(input.noData === undefined ? [] : [ascii(42113, Number.isNaN(input.noData) ? 'nan' : String(input.noData))]),
  ];
  const directory = directoryBytes(tags, offset);
  const header = Buffer.alloc(headerBytes);
  header.write('II', 0, 'latin1');
  header.writeUInt16LE(42, 2);
  header.writeUInt32LE(offset, 4);
  return Buffer.concat([header, ...strips.flatMap((strip) => (strip.length % 2 === 1 ? [strip, Buffer.alloc(1)] : [strip])), directory]);
}

/** Names and units as GDAL's tag has them: escaped for the value and again for the XML around it, as GDAL takes both off (its GeoTIFF driver). */
const twice = (text: string) => xmlText(xmlText(text));

function bandMetadata(bands: readonly { name: string; unit: string }[]): string {
  const items = bands.flatMap(({ name, unit }, band) => [
    `<Item name="DESCRIPTION" sample="${band}" role="description">${twice(name)}</Item>`,
    ...(unit === '' ? [] : [`<Item name="UNITTYPE" sample="${band}" role="unittype">${twice(unit)}</Item>`]),
  ]);
  return `<GDALMetadata>${items.join('')}</GDALMetadata>`;
}

function stripsOf({ width, height, bands }: GeoTiffInput): Buffer[] {
  const Type = bands[0]!.constructor as new (length: number) => Samples;
  const strips: Buffer[] = [];
  for (let top = 0; top < height; top += rowsPerStrip) {
    const rows = Math.min(rowsPerStrip, height - top);
    const samples = new Type(rows * width * bands.length);
    bands.forEach((band, index) => {
      for (let pixel = 0; pixel < rows * width; pixel++) samples[pixel * bands.length + index] = band[top * width + pixel]!;
    });
    strips.push(deflateSync(Buffer.from(samples.buffer), { level: 6 }));
  }
  return strips;
}

interface Tag {
  id: number;
  type: number;
  count: number;
  bytes: Buffer;
}

const short = (id: number, values: number[]): Tag => ({ id, type: 3, count: values.length, bytes: Buffer.from(new Uint16Array(values).buffer) });
const long = (id: number, values: number[]): Tag => ({ id, type: 4, count: values.length, bytes: Buffer.from(new Uint32Array(values).buffer) });
const double = (id: number, values: number[]): Tag => ({ id, type: 12, count: values.length, bytes: Buffer.from(new Float64Array(values).buffer) });
const ascii = (id: number, text: string): Tag => {
  const bytes = Buffer.from(`${text}\0`, 'utf8');
  return { id, type: 2, count: bytes.length, bytes };
};

/** Entries in order of tag; values longer than four bytes follow the directory. */
function directoryBytes(tags: Tag[], at: number): Buffer {
  const fixed = Buffer.alloc(2 + tags.length * 12 + 4);
  fixed.writeUInt16LE(tags.length, 0);
  const tails: Buffer[] = [];
  let tailAt = at + fixed.length;
  tags.forEach((tag, index) => {
    const entry = 2 + index * 12;
    fixed.writeUInt16LE(tag.id, entry);
    fixed.writeUInt16LE(tag.type, entry + 2);
    fixed.writeUInt32LE(tag.count, entry + 4);
    if (tag.bytes.length <= 4) tag.bytes.copy(fixed, entry + 8);
    else {
      fixed.writeUInt32LE(tailAt, entry + 8);
      const padded = tag.bytes.length % 2 === 1 ? Buffer.concat([tag.bytes, Buffer.alloc(1)]) : tag.bytes;
      tails.push(padded);
      tailAt += padded.length;
    }
  });
  return Buffer.concat([fixed, ...tails]);
}
