/*
 * How large a Zstandard stream can become, from its block headers alone (RFC 8878, section 3.1.1).
 * The decoder used later takes all the memory the data ask for, so the question is settled before it runs.
 */

const MAX_BLOCK = 128 * 1024;

/** Upper bound of the unpacked bytes, and never less than what a frame claims. Throws on a damaged or foreign frame. */
export function zstdUpperBound(input: Uint8Array): number {
  let at = 0;
  let bound = 0;
  while (at + 5 <= input.length) {
    const magic = little(input, at, 4);
    at += 4;
    if (magic >= 0x184d2a50 && magic <= 0x184d2a5f) {
      at += 4 + little(input, at, 4);
      continue;
    }
    if (magic !== 0xfd2fb528) throw new RangeError('not a Zstandard frame');
    const descriptor = input[at++]!;
    const single = (descriptor & 0x20) !== 0;
    if (!single) at += 1;
    at += [0, 1, 2, 4][descriptor & 3]!;
    const sizeBytes = [single ? 1 : 0, 2, 4, 8][descriptor >> 6]!;
    const claimed = little(input, at, sizeBytes);
    at += sizeBytes;
    const blocks = walkBlocks(input, at);
    bound += Math.max(blocks.bound, claimed);
    at = blocks.end + ((descriptor & 4) !== 0 ? 4 : 0);
  }
  return bound;
}

function walkBlocks(input: Uint8Array, start: number): { bound: number; end: number } {
  let at = start;
  let bound = 0;
  for (;;) {
    if (at + 3 > input.length) throw new RangeError('Zstandard data end too early');
    const head = little(input, at, 3);
    const kind = (head >> 1) & 3;
    const size = head >> 3;
    if (kind === 3) throw new RangeError('Zstandard block of unknown kind');
    bound += kind === 2 ? MAX_BLOCK : size;
    at += 3 + (kind === 1 ? 1 : size);
    if (at > input.length) throw new RangeError('Zstandard data end too early');
    if ((head & 1) !== 0) return { bound, end: at };
  }
}

function little(input: Uint8Array, at: number, bytes: number): number {
  let value = 0;
  for (let i = bytes - 1; i >= 0; i--) value = value * 256 + (input[at + i] ?? 0);
  return value;
}
