import { constants, crc32, inflateRawSync } from 'node:zlib';
import type { ByteSource } from '../byteSource.ts';
import { ImportProblem } from '../importProblem.ts';
import { limits } from '../limits.ts';
import { checkEntries, readEntries, type ZipEntry } from './zipDirectory.ts';

/** A ZIP whose list of entries was checked; entries are unpacked one at a time, in memory, never to disk. */
export interface ZipArchive {
  readonly entries: readonly ZipEntry[];
  /** Unpacked bytes of an entry. Throws `damaged` when size or checksum do not agree. */
  read(entry: ZipEntry): Uint8Array<ArrayBuffer>;
}

/** Opens an archive (PKWARE APPNOTE 6.3, with ZIP64). Throws ImportProblem; nothing is unpacked yet. */
export function openZip(source: ByteSource): ZipArchive {
  const entries = readEntries(source);
  checkEntries(entries, source.size);
  return { entries, read: (entry) => readEntry(source, entry) };
}

function readEntry(source: ByteSource, entry: ZipEntry): Uint8Array<ArrayBuffer> {
  const local = source.read(entry.offset, 30);
  const view = new DataView(local.buffer);
  if (view.getUint32(0, true) !== 0x04034b50) throw damaged(entry.name, 'it does not begin where the list of contents says');
  const start = entry.offset + 30 + view.getUint16(26, true) + view.getUint16(28, true);
  const packed = source.read(start, entry.packedBytes);
  const bytes = entry.method === 0 ? packed : inflate(packed, entry);
  if (bytes.length !== entry.bytes) throw damaged(entry.name, `it unpacks to ${bytes.length} bytes instead of ${entry.bytes}`);
  if (crc32(bytes) !== entry.crc) throw damaged(entry.name, 'its checksum does not agree');
  return bytes;
}

function inflate(packed: Uint8Array, entry: ZipEntry): Uint8Array<ArrayBuffer> {
  try {
    // One byte more than promised is enough to see that a size lies; nothing larger is ever allocated.
    const out = inflateRawSync(packed, { maxOutputLength: Math.min(limits.archiveEntryBytes, entry.bytes) + 1, finishFlush: constants.Z_SYNC_FLUSH });
    return new Uint8Array(out);
  } catch (error) {
    throw damaged(entry.name, error instanceof RangeError ? 'it unpacks to more than it promises' : 'its packed data are broken', error);
  }
}

function damaged(name: string, detail: string, cause?: unknown): ImportProblem {
  return new ImportProblem({ code: 'damaged', fact: `In the archive, "${name.slice(0, 80)}" is damaged: ${detail}.`, remedy: 'Pack or download the archive again.', params: { entry: name.slice(0, 80), detail }, cause });
}
