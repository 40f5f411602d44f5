import { closeSync, fstatSync, openSync, readSync } from 'node:fs';
import { ImportProblem } from './importProblem.ts';

/** Bytes that can be read at any place, without loading the whole file. */
export interface ByteSource {
  readonly size: number;
  /** Exactly `length` bytes, in a buffer of their own or in the given one of that length. Throws `truncated` where the file ends before. */
  read(offset: number, length: number, into?: Uint8Array<ArrayBuffer>): Uint8Array<ArrayBuffer>;
  close(): void;
}

/** Opens the file at the given path for reading. The caller closes it. */
export function openFile(path: string): ByteSource {
  const descriptor = openSync(path, 'r');
  const size = fstatSync(descriptor).size;
  return {
    size,
    read(offset, length, into) {
      checkRange(offset, length, size);
      const bytes = into ?? new Uint8Array(length);
      let done = 0;
      while (done < length) {
        const got = readSync(descriptor, bytes, done, length - done, offset + done);
        if (got === 0) throw truncated(offset + length, offset + done);
        done += got;
      }
      return bytes;
    },
    close: () => closeSync(descriptor),
  };
}

/** The same over bytes already in memory. */
export function fromBytes(bytes: Uint8Array): ByteSource {
  return {
    size: bytes.byteLength,
    read(offset, length, into) {
      checkRange(offset, length, bytes.byteLength);
      const out = into ?? new Uint8Array(length);
      out.set(bytes.subarray(offset, offset + length));
      return out;
    },
    close: () => undefined,
  };
}

/** A path or bytes; what it opens is closed again, whatever happens inside. */
export async function withSource<T>(input: string | Uint8Array, use: (source: ByteSource) => Promise<T>): Promise<T> {
  const source = typeof input === 'string' ? openFile(input) : fromBytes(input);
  try {
    return await use(source);
  } finally {
    source.close();
  }
}

function checkRange(offset: number, length: number, size: number): void {
  if (!Number.isSafeInteger(offset) || !Number.isSafeInteger(length) || offset < 0 || length < 0 || offset + length > size) throw truncated(offset + length, size);
}

function truncated(needed: number, size: number): ImportProblem {
  return new ImportProblem({
    code: 'truncated',
    fact: `The file ends too early: ${Number.isFinite(needed) ? needed : 'more'} bytes are needed and it has ${size}.`,
    remedy: 'Copy or export it again; the transfer was probably cut off.',
    params: { needed, size },
  });
}
