import { Lzma2Decoder } from './lzma2.ts';

/*
 * One .xz stream as TIFF's LZMA compression writes it: a delta filter before LZMA2 (.xz file format 1.0.4).
 * Checksums are not verified: a damaged strip shows itself as an impossible code or a wrong length.
 */

const MAGIC = [0xfd, 0x37, 0x7a, 0x58, 0x5a, 0x00];
const DELTA = 0x03;
const LZMA2 = 0x21;

/** At most `size` bytes. Throws on anything that is not delta + LZMA2. */
export function decodeXz(input: Uint8Array, size: number): Uint8Array<ArrayBuffer> {
  if (MAGIC.some((byte, i) => input[i] !== byte)) throw new RangeError('not an xz stream');
  const checkBytes = [0, 4, 4, 4, 8, 8, 8, 16, 16, 16, 32, 32, 32, 64, 64, 64][input[7]! & 15]!;
  const parts: Uint8Array[] = [];
  let done = 0;
  for (let at = 12; done < size && input[at] !== undefined && input[at] !== 0; ) {
    const headerBytes = (input[at]! + 1) * 4;
    const deltas = readFilters(input.subarray(at, at + headerBytes));
    const decoder = new Lzma2Decoder(input, at + headerBytes, size - done);
    decoder.run();
    const block = decoder.out.subarray(0, decoder.done);
    for (const distance of deltas) for (let i = distance; i < block.length; i++) block[i] = block[i]! + block[i - distance]!;
    parts.push(block);
    done += block.length;
    at = Math.ceil(decoder.at / 4) * 4 + checkBytes;
  }
  const out = new Uint8Array(done);
  let to = 0;
  for (const part of parts) {
    out.set(part, to);
    to += part.length;
  }
  return out;
}

/** Distances of the delta filters of a block, in the order they are undone. */
function readFilters(header: Uint8Array): number[] {
  let at = 2;
  const number = (): number => {
    let value = 0;
    for (let shift = 0; ; shift += 7) {
      const byte = header[at++];
      if (byte === undefined || shift > 42) throw new RangeError('xz block header is damaged');
      value += (byte & 0x7f) * 2 ** shift;
      if (byte < 0x80) return value;
    }
  };
  const flags = header[1] ?? 0;
  if ((flags & 0x40) !== 0) number();
  if ((flags & 0x80) !== 0) number();
  const deltas: number[] = [];
  for (let i = 0; i <= (flags & 3); i++) {
    const id = number();
    const propertyBytes = number();
    const property = header[at] ?? 0;
    at += propertyBytes;
    if (id === DELTA) deltas.unshift(property + 1);
    else if (id !== LZMA2) throw new RangeError(`xz filter ${id} is not known`);
  }
  return deltas;
}
