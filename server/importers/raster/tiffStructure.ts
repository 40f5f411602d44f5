import type { ByteSource } from '../byteSource.ts';
import { ImportProblem } from '../importProblem.ts';
import { limits } from '../limits.ts';

/*
 * The skeleton of a TIFF, read before any library touches the file: every count and offset in a damaged or hostile
 * directory is checked against the size of the file, so nothing is allocated that the file could not fill.
 * Layout: TIFF 6.0 (Adobe 1992); BigTIFF (64-bit counts and offsets, 20-byte entries).
 */

export interface TagEntry {
  readonly tag: number;
  readonly type: number;
  readonly count: number;
  readonly byteLength: number;
  /** Where the value's bytes lie in the file. */
  readonly offset: number;
}

export interface TiffDirectory {
  readonly offset: number;
  readonly tags: ReadonlyMap<number, TagEntry>;
}

export interface TiffStructure {
  readonly littleEndian: boolean;
  readonly bigTiff: boolean;
  readonly directories: readonly TiffDirectory[];
  /** The chain of directories comes back to itself or leaves the file; what was read before is usable. */
  readonly brokenChain: boolean;
}

/** Bytes of one value, by TIFF field type. */
const typeBytes: Readonly<Record<number, number>> = { 1: 1, 2: 1, 3: 2, 4: 4, 5: 8, 6: 1, 7: 1, 8: 2, 9: 4, 10: 8, 11: 4, 12: 8, 13: 4, 16: 8, 17: 8, 18: 8 };

/** Tags that list tiles or strips, and may therefore be long: offsets and byte counts. */
const blockTags = new Set([273, 279, 324, 325]);

/** Reads header and directories. Throws `wrong-type`, `truncated` or `damaged`. */
export function scanTiffStructure(source: ByteSource): TiffStructure {
  const { littleEndian, bigTiff, first } = readHeader(source);
  const directories: TiffDirectory[] = [];
  const seen = new Set<number>();
  let brokenChain = false;
  for (let offset = first; offset !== 0; ) {
    if (seen.has(offset) || directories.length >= limits.tiffDirectories) {
      brokenChain = seen.has(offset);
      break;
    }
    seen.add(offset);
    try {
      const { directory, next } = readDirectory(source, offset, { littleEndian, bigTiff });
      directories.push(directory);
      offset = next;
    } catch (error) {
      // Only the first directory is needed; a broken later one costs overviews or pages, not the picture.
      if (directories.length === 0) throw error;
      brokenChain = true;
      break;
    }
  }
  if (directories.length === 0) throw damaged('It says it is a TIFF but holds no picture.');
  return { littleEndian, bigTiff, directories, brokenChain };
}

interface Flavour {
  littleEndian: boolean;
  bigTiff: boolean;
}

function readHeader(source: ByteSource): Flavour & { first: number } {
  if (source.size < 8) throw new ImportProblem({ code: source.size === 0 ? 'empty' : 'truncated', fact: `The file has ${source.size} bytes.`, remedy: 'Copy or export it again.', params: { size: source.size } });
  const bytes = source.read(0, Math.min(16, source.size));
  const view = new DataView(bytes.buffer);
  const mark = view.getUint16(0);
  if (mark !== 0x4949 && mark !== 0x4d4d) throw new ImportProblem({ code: 'wrong-type', fact: 'It is not a TIFF file.', remedy: 'Send a GeoTIFF (.tif).' });
  const littleEndian = mark === 0x4949;
  const magic = view.getUint16(2, littleEndian);
  if (magic === 42) return { littleEndian, bigTiff: false, first: view.getUint32(4, littleEndian) };
  if (magic !== 43 || bytes.length < 16 || view.getUint16(4, littleEndian) !== 8) throw damaged('Its TIFF header is not one of the two known kinds.');
  return { littleEndian, bigTiff: true, first: safeOffset(view.getBigUint64(8, littleEndian)) };
}

function readDirectory(source: ByteSource, offset: number, flavour: Flavour): { directory: TiffDirectory; next: number } {
  const { littleEndian, bigTiff } = flavour;
  const countBytes = bigTiff ? 8 : 2;
  const entryBytes = bigTiff ? 20 : 12;
  const head = new DataView(source.read(offset, countBytes).buffer);
  const entries = bigTiff ? safeOffset(head.getBigUint64(0, littleEndian)) : head.getUint16(0, littleEndian);
  if (entries === 0 || entries > limits.tiffTagsPerDirectory) throw damaged(`A directory of the TIFF claims ${entries} entries.`);
  const start = offset + countBytes;
  const view = new DataView(source.read(start, entries * entryBytes).buffer);
  const tags = new Map<number, TagEntry>();
  for (let i = 0; i < entries; i++) {
    const entry = readEntry(view, i * entryBytes, start + i * entryBytes, flavour);
    if (entry === null) continue;
    checkEntry(entry, source.size);
    if (!tags.has(entry.tag)) tags.set(entry.tag, entry);
  }
  const tail = start + entries * entryBytes;
  const pointerBytes = bigTiff ? 8 : 4;
  // Some writers stop right after the last entry of the last directory.
  if (tail + pointerBytes > source.size) return { directory: { offset, tags }, next: 0 };
  const pointer = new DataView(source.read(tail, pointerBytes).buffer);
  return { directory: { offset, tags }, next: bigTiff ? safeOffset(pointer.getBigUint64(0, littleEndian)) : pointer.getUint32(0, littleEndian) };
}

function readEntry(view: DataView, at: number, fileAt: number, { littleEndian, bigTiff }: Flavour): TagEntry | null {
  const tag = view.getUint16(at, littleEndian);
  const type = view.getUint16(at + 2, littleEndian);
  const size = typeBytes[type];
  if (size === undefined) {
    // The standard asks readers to skip unknown field types, but the tag-reading library stops at them.
    throw damaged(`Tag ${tag} has the unknown field type ${type}.`);
  }
  const count = bigTiff ? safeOffset(view.getBigUint64(at + 4, littleEndian)) : view.getUint32(at + 4, littleEndian);
  const byteLength = count * size;
  const inlineAt = bigTiff ? 12 : 8;
  if (byteLength <= (bigTiff ? 8 : 4)) return { tag, type, count, byteLength, offset: fileAt + inlineAt };
  const offset = bigTiff ? safeOffset(view.getBigUint64(at + inlineAt, littleEndian)) : view.getUint32(at + inlineAt, littleEndian);
  return { tag, type, count, byteLength, offset };
}

function checkEntry(entry: TagEntry, fileSize: number): void {
  const cap = blockTags.has(entry.tag) ? limits.rasterBlocks * 8 : limits.tiffTagBytes;
  if (entry.byteLength > cap) throw damaged(`Tag ${entry.tag} claims ${entry.count} values.`);
  if (entry.offset + entry.byteLength > fileSize) {
    throw new ImportProblem({
      code: 'truncated',
      fact: `Tag ${entry.tag} points past the end of the file (${entry.offset + entry.byteLength} of ${fileSize} bytes).`,
      remedy: 'Copy or export it again; the transfer was probably cut off.',
      params: { tag: entry.tag, needed: entry.offset + entry.byteLength, size: fileSize },
    });
  }
}

/** All values of a whole-number tag, in the byte order of the file. */
export function readTagNumbers(source: ByteSource, entry: TagEntry, littleEndian: boolean): Float64Array {
  const view = new DataView(source.read(entry.offset, entry.byteLength).buffer);
  const out = new Float64Array(entry.count);
  const read: Readonly<Record<number, (at: number) => number>> = {
    1: (at) => view.getUint8(at),
    3: (at) => view.getUint16(at * 2, littleEndian),
    4: (at) => view.getUint32(at * 4, littleEndian),
    13: (at) => view.getUint32(at * 4, littleEndian),
    16: (at) => Number(view.getBigUint64(at * 8, littleEndian)),
    18: (at) => Number(view.getBigUint64(at * 8, littleEndian)),
  };
  const readOne = read[entry.type];
  if (readOne === undefined) throw damaged(`Tag ${entry.tag} is not a list of whole numbers.`);
  for (let i = 0; i < entry.count; i++) out[i] = readOne(i);
  return out;
}

function safeOffset(value: bigint): number {
  if (value > BigInt(Number.MAX_SAFE_INTEGER)) throw damaged('It holds an offset larger than any file.');
  return Number(value);
}

function damaged(fact: string): ImportProblem {
  return new ImportProblem({ code: 'damaged', fact, remedy: 'Export the file again from the program that made it, or copy it again.' });
}
