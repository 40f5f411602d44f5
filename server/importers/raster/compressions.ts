import { constants, inflateSync } from 'node:zlib';
import { decodeLzw } from './lzw.ts';
import { decodePackBits } from './packBits.ts';
import { decodeXz } from './xz.ts';
import { zstdUpperBound } from './zstdBound.ts';

/** Unpacks one tile or strip into at most `size` bytes. */
export type Unpack = (raw: Uint8Array<ArrayBuffer>, size: number) => Uint8Array<ArrayBuffer>;

export interface Compression {
  readonly name: string;
  /** Null: known by name, but not read. */
  readonly prepare: (() => Promise<Unpack>) | null;
  /** Why it is not read. */
  readonly reason?: string;
}

/** Some writers pad the last strip; more than this is no padding. */
const PADDING = 65536;

const lossy = 'it changes pixel values to save space';
const picture = 'it is meant for pictures, not for measured values';

const inflate: Unpack = (raw, size) => {
  // One piece, a byte longer than the tile: a piece that comes out full is followed by another of its size. The cap stops a
  // stream that unpacks to far more than its tile. A sync flush at the end gives what there is of a stream cut short; the
  // caller compares the length.
  const out = inflateSync(raw, { chunkSize: Math.max(64, size + 1), maxOutputLength: size + PADDING, finishFlush: constants.Z_SYNC_FLUSH });
  const bytes = out.length > size ? out.subarray(0, size) : out;
  return bytes.byteOffset === 0 ? (bytes as Uint8Array<ArrayBuffer>) : new Uint8Array(bytes);
};

/** TIFF compression numbers and what becomes of them. */
export const compressions: ReadonlyMap<number, Compression> = new Map<number, Compression>([
  [1, { name: 'none', prepare: async () => (raw, size) => raw.subarray(0, size) }],
  [2, { name: 'CCITT fax', prepare: null, reason: picture }],
  [3, { name: 'CCITT fax', prepare: null, reason: picture }],
  [4, { name: 'CCITT fax', prepare: null, reason: picture }],
  [5, { name: 'LZW', prepare: async () => decodeLzw }],
  [6, { name: 'old JPEG', prepare: null, reason: lossy }],
  [7, { name: 'JPEG', prepare: null, reason: lossy }],
  [8, { name: 'Deflate', prepare: async () => inflate }],
  [32773, { name: 'PackBits', prepare: async () => decodePackBits }],
  [32946, { name: 'Deflate', prepare: async () => inflate }],
  [34712, { name: 'JPEG 2000', prepare: null, reason: lossy }],
  [34887, { name: 'LERC', prepare: null, reason: 'no reader for it is part of this program' }],
  [34925, { name: 'LZMA', prepare: async () => decodeXz }],
  [50000, { name: 'ZSTD', prepare: prepareZstd }],
  [50001, { name: 'WebP', prepare: null, reason: lossy }],
  [50002, { name: 'JPEG XL', prepare: null, reason: lossy }],
]);

/** Its decoder is loaded for the pictures that need it. */
async function prepareZstd(): Promise<Unpack> {
  const { ZSTDDecoder } = await import('zstddec');
  const decoder = new ZSTDDecoder();
  await decoder.init();
  return (raw, size) => {
    if (zstdUpperBound(raw) > 2 * size + 2 ** 20) throw new RangeError('Zstandard data unpack to more than their tile');
    // With a size given the decoder works in one step; without one it may loop for ever on damaged data.
    return owned(decoder.decode(raw, size));
  };
}

/** Bytes in a buffer of their own, so that typed arrays can be laid over it from its beginning. */
function owned(bytes: Uint8Array): Uint8Array<ArrayBuffer> {
  if (bytes.byteOffset === 0 && bytes.buffer instanceof ArrayBuffer && bytes.byteLength === bytes.buffer.byteLength) return bytes as Uint8Array<ArrayBuffer>;
  return new Uint8Array(bytes);
}
