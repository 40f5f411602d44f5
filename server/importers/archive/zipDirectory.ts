import type { ByteSource } from '../byteSource.ts';
import { ImportProblem } from '../importProblem.ts';
import { limits } from '../limits.ts';

export interface ZipEntry {
  /** Path inside the archive with forward slashes. */
  readonly name: string;
  readonly packedBytes: number;
  readonly bytes: number;
  readonly method: number;
  readonly crc: number;
  readonly offset: number;
  readonly isEncrypted: boolean;
  /** A link of a Unix file system. */
  readonly isLink: boolean;
}

/** The archive's own list of contents, folders left out. Throws `damaged` or `unsafe-archive`. */
export function readEntries(source: ByteSource): ZipEntry[] {
  const end = findEnd(source);
  if (end.count > limits.archiveEntries) throw unsafe(`It holds ${end.count} files; ${limits.archiveEntries} is the most.`, { count: end.count });
  if (end.offset + end.bytes > source.size) throw damaged('Its list of contents lies outside the file.');
  const view = new DataView(source.read(end.offset, end.bytes).buffer);
  const entries: ZipEntry[] = [];
  for (let at = 0; entries.length <= limits.archiveEntries && at + 46 <= view.byteLength && view.getUint32(at, true) === 0x02014b50; ) {
    const { entry, next } = readEntry(view, at);
    if (!entry.name.endsWith('/')) entries.push(entry);
    at = next;
  }
  if (entries.length > limits.archiveEntries) throw unsafe(`It holds more than ${limits.archiveEntries} files.`, {});
  if (entries.length === 0) throw new ImportProblem({ code: 'empty', fact: 'The archive holds no files.', remedy: 'Pack the files again and send the new archive.' });
  return entries;
}

/** Names, sizes and kinds of all entries, before anything is unpacked. Throws `unsafe-archive` or `encrypted`. */
export function checkEntries(entries: readonly ZipEntry[], fileSize: number): void {
  let bytes = 0;
  let packed = 0;
  for (const entry of entries) {
    const shown = entry.name.slice(0, 80);
    if (isUnsafeName(entry.name)) throw unsafe(`It holds a file with an unsafe path ("${shown}").`, { entry: shown });
    if (entry.isLink) throw unsafe(`It holds a link instead of a file ("${shown}").`, { entry: shown });
    if (entry.isEncrypted) throw new ImportProblem({ code: 'encrypted', fact: `Its contents are protected by a password ("${shown}").`, remedy: 'Pack the files again without a password.', params: { entry: shown } });
    if (entry.bytes > limits.archiveEntryBytes) throw unsafe(`"${shown}" would unpack to ${megabytes(entry.bytes)} MB; ${megabytes(limits.archiveEntryBytes)} MB is the most.`, { entry: shown });
    if (entry.bytes > limits.archiveRatioFromBytes && entry.bytes > limits.archiveRatio * Math.max(1, entry.packedBytes))
      throw unsafe(`"${shown}" would unpack to ${Math.round(entry.bytes / Math.max(1, entry.packedBytes))} times its packed size.`, {
        entry: shown,
      });
    bytes += entry.bytes;
    packed += entry.packedBytes;
  }
  if (bytes > limits.archiveBytes) throw unsafe(`It would unpack to ${megabytes(bytes)} MB; ${megabytes(limits.archiveBytes)} MB is the most.`, { mb: megabytes(bytes) });
  // Entries that share the same packed bytes are the trick behind the largest archive bombs.
  if (packed > fileSize) throw unsafe('Its files overlap inside the archive.', {});
}

interface EndRecord {
  count: number;
  bytes: number;
  offset: number;
}

/** End-of-directory record, looked for backwards behind a comment of at most 65,535 bytes; ZIP64 where it points there. */
function findEnd(source: ByteSource): EndRecord {
  const tailBytes = Math.min(source.size, 65_557);
  const tail = new DataView(source.read(source.size - tailBytes, tailBytes).buffer);
  for (let at = tailBytes - 22; at >= 0; at--) {
    if (tail.getUint32(at, true) !== 0x06054b50) continue;
    const found = { count: tail.getUint16(at + 10, true), bytes: tail.getUint32(at + 12, true), offset: tail.getUint32(at + 16, true) };
    const needs64 = found.count === 0xffff || found.bytes === 0xffffffff || found.offset === 0xffffffff;
    return needs64 && at >= 20 && tail.getUint32(at - 20, true) === 0x07064b50 ? readEnd64(source, Number(tail.getBigUint64(at - 12, true))) : found;
  }
  throw damaged('Its list of contents is missing; the end of the file was probably cut off.');
}

function readEnd64(source: ByteSource, at: number): EndRecord {
  if (!(at + 56 <= source.size)) throw damaged('Its list of contents lies outside the file.');
  const view = new DataView(source.read(at, 56).buffer);
  if (view.getUint32(0, true) !== 0x06064b50) throw damaged('Its list of contents is damaged.');
  return { count: Number(view.getBigUint64(32, true)), bytes: Number(view.getBigUint64(40, true)), offset: Number(view.getBigUint64(48, true)) };
}

function readEntry(view: DataView, at: number): { entry: ZipEntry; next: number } {
  const [nameBytes, extraBytes, commentBytes] = [view.getUint16(at + 28, true), view.getUint16(at + 30, true), view.getUint16(at + 32, true)];
  const next = at + 46 + nameBytes + extraBytes + commentBytes;
  if (next > view.byteLength) throw damaged('Its list of contents is damaged.');
  const flags = view.getUint16(at + 8, true);
  const sizes = wideSizes(view, { at: at + 46 + nameBytes, end: at + 46 + nameBytes + extraBytes }, [view.getUint32(at + 24, true), view.getUint32(at + 20, true), view.getUint32(at + 42, true)]);
  const madeByUnix = view.getUint8(at + 5) === 3;
  const method = view.getUint16(at + 10, true);
  const name = entryName(new Uint8Array(view.buffer, view.byteOffset + at + 46, nameBytes), (flags & 0x800) !== 0);
  if (method !== 0 && method !== 8) throw new ImportProblem({ code: 'unsupported-encoding', fact: `"${name.slice(0, 80)}" is packed with method ${method}, which is not read.`, remedy: 'Pack the files again as a plain ZIP.', params: { method } });
  const entry: ZipEntry = {
    name,
    bytes: sizes[0],
    packedBytes: sizes[1],
    offset: sizes[2],
    method,
    crc: view.getUint32(at + 16, true),
    isEncrypted: (flags & 1) !== 0,
    isLink: madeByUnix && ((view.getUint32(at + 38, true) >>> 16) & 0xf000) === 0xa000,
  };
  return { entry, next };
}

/** Sizes of 2^32 − 1 stand in the ZIP64 extra field instead, in this order. */
function wideSizes(view: DataView, { at, end }: { at: number; end: number }, sizes: [number, number, number]): [number, number, number] {
  const out: [number, number, number] = [...sizes];
  for (let field = at; field + 4 <= end; field += 4 + view.getUint16(field + 2, true)) {
    if (view.getUint16(field, true) !== 1) continue;
    let value = field + 4;
    for (let i = 0; i < 3; i++) {
      if (out[i] !== 0xffffffff) continue;
      if (value + 8 > end) throw damaged('Its list of contents is damaged.');
      out[i] = Number(view.getBigUint64(value, true));
      value += 8;
    }
  }
  return out;
}

/** Names are UTF-8 when flagged or when they read as such; old packers wrote one byte a letter. */
function entryName(bytes: Uint8Array, isUtf8: boolean): string {
  const text = isUtf8 ? new TextDecoder().decode(bytes) : tryUtf8(bytes);
  return text.replaceAll('\\', '/');
}

function tryUtf8(bytes: Uint8Array): string {
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    return new TextDecoder('windows-1252').decode(bytes);
  }
}

function isUnsafeName(name: string): boolean {
  return name.startsWith('/') || /^[a-zA-Z]:/.test(name) || name.includes('\0') || name.split('/').includes('..');
}

function megabytes(bytes: number): number {
  return Math.round(bytes / 2 ** 20);
}

function damaged(fact: string): ImportProblem {
  return new ImportProblem({ code: 'damaged', fact, remedy: 'Pack or download the archive again.' });
}

function unsafe(fact: string, params: Record<string, string | number>): ImportProblem {
  return new ImportProblem({ code: 'unsafe-archive', fact, remedy: 'Pack only the needed files into a plain ZIP and send that.', params });
}

/** Folders and files that some packers add beside the real ones. */
export function isPackerRubbish(name: string): boolean {
  return name.split('/').some((part) => part === '__MACOSX' || part.startsWith('._'));
}
