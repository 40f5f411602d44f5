import { deflateSync } from 'node:zlib';

/** A small TIFF made by hand: every field can be set wrong on purpose. */
export interface TiffPlan {
  width: number;
  height: number;
  /** Value of a pixel; default: column + 10 · row + 100 · band. */
  value?: (col: number, row: number, band: number) => number;
  bands?: number;
  type?: 'u8' | 'i8' | 'u16' | 'i16' | 'u32' | 'i32' | 'f32' | 'f64' | 'u64';
  /** Side of square tiles; strips of `rowsPerStrip` rows without it. */
  tile?: number;
  rowsPerStrip?: number;
  compression?: number;
  separate?: boolean;
  bigEndian?: boolean;
  bigTiff?: boolean;
  /** Geo tags; null: none at all. */
  geo?: GeoPlan | null;
  noData?: string;
  /** More tags, or other values for tags; null takes a tag out. Numbers are written as 32-bit whole numbers, text as ASCII. */
  tags?: Readonly<Record<number, readonly number[] | string | null>>;
  /** Bytes of a block instead of the honest ones. */
  block?: (honest: Uint8Array, index: number) => Uint8Array;
  /** Offset of the next directory; default 0. */
  next?: number;
}

export interface GeoPlan {
  epsg?: number;
  /** Outer corner of the first pixel and the side of a pixel. */
  x?: number;
  y?: number;
  pixel?: number;
  isPoint?: boolean;
  /** Height of a pixel as written, when it is not the side. */
  height?: number;
  /** Sixteen numbers instead of corner and side. */
  transformation?: readonly number[];
  /** Sixes of column, row, 0, x, y, 0 instead. */
  tiePoints?: readonly number[];
  /** Keys as quadruples, instead of those for the EPSG code. */
  keys?: readonly number[];
  doubles?: readonly number[];
  text?: string;
}

const types = {
  u8: [1, 1, (v: DataView, at: number, n: number) => v.setUint8(at, n)],
  i8: [1, 2, (v: DataView, at: number, n: number) => v.setInt8(at, n)],
  u16: [2, 1, (v: DataView, at: number, n: number, little: boolean) => v.setUint16(at, n, little)],
  i16: [2, 2, (v: DataView, at: number, n: number, little: boolean) => v.setInt16(at, n, little)],
  u32: [4, 1, (v: DataView, at: number, n: number, little: boolean) => v.setUint32(at, n, little)],
  i32: [4, 2, (v: DataView, at: number, n: number, little: boolean) => v.setInt32(at, n, little)],
  f32: [4, 3, (v: DataView, at: number, n: number, little: boolean) => v.setFloat32(at, n, little)],
  f64: [8, 3, (v: DataView, at: number, n: number, little: boolean) => v.setFloat64(at, n, little)],
  u64: [8, 1, (v: DataView, at: number, n: number, little: boolean) => v.setBigUint64(at, BigInt(n), little)],
} as const;

type Entry = { tag: number; type: number; count: number; bytes: Uint8Array };

export function writeTiff(plan: TiffPlan): Uint8Array {
  const little = plan.bigEndian !== true;
  const blocks = blocksOf(plan, little).map((block, i) => plan.block?.(block, i) ?? block);
  const headerBytes = plan.bigTiff === true ? 16 : 8;
  const offsets: number[] = [];
  let at = headerBytes;
  for (const block of blocks) {
    offsets.push(block.length === 0 ? 0 : at);
    at += block.length + (block.length % 2);
  }
  const directory = directoryBytes(entriesOf(plan, { offsets, counts: blocks.map((block) => block.length), little }), { at, little, bigTiff: plan.bigTiff === true, next: plan.next ?? 0 });
  const out = new Uint8Array(at + directory.length);
  const view = new DataView(out.buffer);
  view.setUint16(0, little ? 0x4949 : 0x4d4d);
  view.setUint16(2, plan.bigTiff === true ? 43 : 42, little);
  if (plan.bigTiff === true) {
    view.setUint16(4, 8, little);
    view.setBigUint64(8, BigInt(at), little);
  } else view.setUint32(4, at, little);
  blocks.forEach((block, i) => out.set(block, offsets[i]!));
  out.set(directory, at);
  return out;
}

function blocksOf(plan: TiffPlan, little: boolean): Uint8Array[] {
  const { width, height, bands = 1, type = 'u16', tile, value = (col, row, band) => col + 10 * row + 100 * band } = plan;
  const [bytes, , put] = types[type];
  const [blockWidth, blockHeight] = tile === undefined ? [width, plan.rowsPerStrip ?? height] : [tile, tile];
  const planes = plan.separate === true ? bands : 1;
  const perPixel = plan.separate === true ? 1 : bands;
  const out: Uint8Array[] = [];
  for (let plane = 0; plane < planes; plane++) {
    for (let top = 0; top < height; top += blockHeight) {
      for (let left = 0; left < width; left += blockWidth) {
        const rows = tile === undefined ? Math.min(blockHeight, height - top) : blockHeight;
        const view = new DataView(new ArrayBuffer(blockWidth * rows * perPixel * bytes));
        for (let i = 0; i < blockWidth * rows * perPixel; i++) {
          const pixel = Math.floor(i / perPixel);
          const [col, row] = [left + (pixel % blockWidth), top + Math.floor(pixel / blockWidth)];
          put(view, i * bytes, col < width && row < height ? value(col, row, plan.separate === true ? plane : i % perPixel) : 0, little);
        }
        const raw = new Uint8Array(view.buffer);
        out.push(plan.compression === 8 ? new Uint8Array(deflateSync(raw)) : raw);
      }
    }
  }
  return out;
}

function entriesOf(plan: TiffPlan, { offsets, counts, little }: { offsets: number[]; counts: number[]; little: boolean }): Entry[] {
  const { width, height, bands = 1, type = 'u16', tile } = plan;
  const [bytes, format] = types[type];
  const whole = (tag: number, ...values: number[]): Entry => ({ tag, type: 4, count: values.length, bytes: packed(values, 4, (view, at, n) => view.setUint32(at, n, little)) });
  const doubles = (tag: number, values: readonly number[]): Entry => ({ tag, type: 12, count: values.length, bytes: packed(values, 8, (view, at, n) => view.setFloat64(at, n, little)) });
  const shorts = (tag: number, values: readonly number[]): Entry => ({ tag, type: 3, count: values.length, bytes: packed(values, 2, (view, at, n) => view.setUint16(at, n, little)) });
  const text = (tag: number, words: string): Entry => ({ tag, type: 2, count: words.length + 1, bytes: new TextEncoder().encode(`${words}\0`) });
  const entries = [
    whole(256, width),
    whole(257, height),
    shorts(258, Array<number>(bands).fill(bytes * 8)),
    shorts(259, [plan.compression ?? 1]),
    shorts(262, [1]),
    shorts(277, [bands]),
    shorts(284, [plan.separate === true ? 2 : 1]),
    shorts(339, Array<number>(bands).fill(format)),
    ...(tile === undefined ? [whole(273, ...offsets), whole(278, plan.rowsPerStrip ?? height), whole(279, ...counts)] : [whole(322, tile), whole(323, tile), whole(324, ...offsets), whole(325, ...counts)]),
    ...(plan.noData === undefined ? [] : [text(42113, plan.noData)]),
  ];
  const geo = plan.geo === undefined ? {} : plan.geo;
  if (geo !== null) {
    const { x = 500000, y = 4950000, pixel = 2, epsg = 32631 } = geo;
    if (geo.transformation !== undefined) entries.push(doubles(34264, geo.transformation));
    else if (geo.tiePoints !== undefined) entries.push(doubles(33922, geo.tiePoints));
    else entries.push(doubles(33550, [pixel, geo.height ?? pixel, 0]), doubles(33922, [0, 0, 0, x, y, 0]));
    const projected = epsg >= 4000 && epsg < 5000 ? [1024, 0, 1, 2, 2048, 0, 1, epsg] : [1024, 0, 1, 1, 3072, 0, 1, epsg];
    const keys = geo.keys ?? [...projected.slice(0, 4), 1025, 0, 1, geo.isPoint === true ? 2 : 1, ...projected.slice(4)];
    if (keys.length > 0) entries.push(shorts(34735, [1, 1, 1, keys.length / 4, ...keys]));
    if (geo.doubles !== undefined) entries.push(doubles(34736, geo.doubles));
    if (geo.text !== undefined) entries.push(text(34737, geo.text));
  }
  for (const [id, value] of Object.entries(plan.tags ?? {})) {
    const at = entries.findIndex(({ tag }) => tag === Number(id));
    if (at >= 0) entries.splice(at, 1);
    if (value !== null) entries.push(typeof value === 'string' ? text(Number(id), value) : whole(Number(id), ...value));
  }
  return entries.sort((a, b) => a.tag - b.tag);
}

function packed(values: readonly number[], bytes: number, put: (view: DataView, at: number, n: number) => void): Uint8Array {
  const view = new DataView(new ArrayBuffer(values.length * bytes));
  values.forEach((value, i) => put(view, i * bytes, value));
  return new Uint8Array(view.buffer);
}

function directoryBytes(entries: readonly Entry[], { at, little, bigTiff, next }: { at: number; little: boolean; bigTiff: boolean; next: number }): Uint8Array {
  const [countBytes, entryBytes, inline] = bigTiff ? [8, 20, 8] : [2, 12, 4];
  const headBytes = countBytes + entries.length * entryBytes + inline;
  const outside = entries.filter(({ bytes }) => bytes.length > inline);
  const out = new Uint8Array(headBytes + outside.reduce((sum, { bytes }) => sum + bytes.length + (bytes.length % 2), 0));
  const view = new DataView(out.buffer);
  const wide = (place: number, value: number): void => (bigTiff ? view.setBigUint64(place, BigInt(value), little) : view.setUint32(place, value, little));
  if (bigTiff) view.setBigUint64(0, BigInt(entries.length), little);
  else view.setUint16(0, entries.length, little);
  let free = headBytes;
  entries.forEach(({ tag, type, count, bytes }, i) => {
    const place = countBytes + i * entryBytes;
    view.setUint16(place, tag, little);
    view.setUint16(place + 2, type, little);
    wide(place + 4, count);
    if (bytes.length <= inline) out.set(bytes, place + entryBytes - inline);
    else {
      wide(place + entryBytes - inline, at + free);
      out.set(bytes, free);
      free += bytes.length + (bytes.length % 2);
    }
  });
  wide(headBytes - inline, next);
  return out;
}
