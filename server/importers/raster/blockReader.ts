import type { ByteSource } from '../byteSource.ts';
import { ImportProblem } from '../importProblem.ts';
import { compressions, type Unpack } from './compressions.ts';
import { undoDifferences, undoFloatDifferences } from './predictors.ts';
import { blockRowBytes, type RasterLayout } from './rasterLayout.ts';
import { sampleValues, type SampleValues } from './sampleValues.ts';

/** Reads tiles or strips of one picture as numbers. */
export interface BlockReader {
  readonly layout: RasterLayout;
  /**
   * Values of one block, row by row, `stride` numbers to a pixel. Null where the file leaves the block out (all missing).
   * `plane` is the band when bands are separate, else 0. Throws `truncated` or `damaged` with the place.
   */
  read(blockCol: number, blockRow: number, plane: number): SampleValues | null;
}

/** Prepares the decoder of the file's compression, once. */
export async function openBlocks(source: ByteSource, layout: RasterLayout): Promise<BlockReader> {
  const prepare = compressions.get(layout.compression)!.prepare!;
  const reader: Reader = { source, layout, unpack: await prepare(), packed: new Uint8Array(0) };
  return { layout, read: (blockCol, blockRow, plane) => readBlock(reader, { blockCol, blockRow, plane }) };
}

interface Reader {
  source: ByteSource;
  layout: RasterLayout;
  unpack: Unpack;
  /** Packed bytes of the block in hand; used again for the next, so that a large picture leaves less to collect. */
  packed: Uint8Array<ArrayBuffer>;
}

interface Place {
  blockCol: number;
  blockRow: number;
  plane: number;
}

function readBlock(reader: Reader, place: Place): SampleValues | null {
  const { source, layout } = reader;
  const index = (place.plane * layout.blocksDown + place.blockRow) * layout.blocksAcross + place.blockCol;
  const byteCount = layout.byteCounts[index]!;
  if (byteCount === 0) return null;
  const offset = layout.offsets[index]!;
  if (offset + byteCount > source.size) throw cutOff(place, offset + byteCount, source.size);
  const bytes = unpackBlock(reader, packedBytes(reader, offset, byteCount), place);
  return sampleValues(bytes, layout, layout.blockWidth * (layout.separate ? 1 : layout.samples));
}

/** Bytes that are not packed become the block's values, so they get a buffer of their own. */
function packedBytes(reader: Reader, offset: number, byteCount: number): Uint8Array<ArrayBuffer> {
  if (reader.layout.compression === 1) return reader.source.read(offset, byteCount);
  if (reader.packed.length < byteCount) reader.packed = new Uint8Array(Math.ceil(byteCount * 1.25));
  return reader.source.read(offset, byteCount, reader.packed.subarray(0, byteCount));
}

/** Unpacked bytes in the machine's byte order, predictor undone, at least the rows that lie in the picture. */
function unpackBlock({ layout, unpack }: Reader, raw: Uint8Array<ArrayBuffer>, place: Place): Uint8Array<ArrayBuffer> {
  const rowBytes = blockRowBytes(layout);
  const rows = Math.min(layout.blockHeight, layout.height - place.blockRow * layout.blockHeight);
  let bytes: Uint8Array<ArrayBuffer>;
  try {
    bytes = unpack(raw, rowBytes * layout.blockHeight);
  } catch (error) {
    throw damagedBlock(place, error instanceof Error ? error.message : 'unknown', error);
  }
  if (bytes.byteLength < rows * rowBytes) throw layout.compression === 1 ? tooShort(place, bytes.byteLength, rows * rowBytes) : damagedBlock(place, `${bytes.byteLength} of ${rows * rowBytes} bytes`, undefined);
  const shape = { samplesPerRow: layout.blockWidth * (layout.separate ? 1 : layout.samples), stride: layout.separate ? 1 : layout.samples, bytesPerSample: layout.bits / 8 };
  if (layout.predictor === 3) return undoFloatDifferences(bytes, shape);
  // Differences were taken of the numbers, not of the bytes: the byte order is put right first.
  if (!layout.littleEndian) swapBytes(bytes, layout.bits);
  if (layout.predictor === 2) undoDifferences(bytes, shape);
  return bytes;
}

function swapBytes(bytes: Uint8Array<ArrayBuffer>, bits: number): void {
  const whole = bytes.byteLength - (bytes.byteLength % (bits / 8));
  const buffer = Buffer.from(bytes.buffer, bytes.byteOffset, whole);
  if (bits === 16) buffer.swap16();
  else if (bits === 32) buffer.swap32();
  else if (bits === 64) buffer.swap64();
}

function where({ blockCol, blockRow }: Place): string {
  return `the tile or strip ${blockCol + 1} across, ${blockRow + 1} down`;
}

function cutOff(place: Place, needed: number, size: number): ImportProblem {
  return new ImportProblem({
    code: 'truncated',
    fact: `The file ends inside its picture: ${where(place)} needs bytes up to ${needed} and the file has ${size}.`,
    remedy: 'Copy or export it again; the transfer was probably cut off.',
    params: { needed, size },
  });
}

function tooShort(place: Place, held: number, needed: number): ImportProblem {
  return new ImportProblem({
    code: 'truncated',
    fact: `Its picture is shorter than it claims: ${where(place)} has ${held} of ${needed} bytes.`,
    remedy: 'Copy or export it again.',
    params: { held, needed },
  });
}

function damagedBlock(place: Place, detail: string, cause: unknown): ImportProblem {
  return new ImportProblem({
    code: 'damaged',
    fact: `The picture data of ${where(place)} are damaged (${detail.slice(0, 120)}).`,
    remedy: 'Copy or export it again.',
    params: { detail },
    cause,
  });
}
