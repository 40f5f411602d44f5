/** PackBits run-length decoding (TIFF 6.0, section 9). At most `size` bytes; fewer when the data stop early. */
export function decodePackBits(input: Uint8Array, size: number): Uint8Array<ArrayBuffer> {
  const out = new Uint8Array(size);
  let done = 0;
  for (let at = 0; at < input.length && done < size; ) {
    const head = input[at++]!;
    if (head === 128) continue;
    if (head < 128) {
      const count = Math.min(head + 1, input.length - at, size - done);
      out.set(input.subarray(at, at + count), done);
      at += head + 1;
      done += count;
    } else {
      if (at >= input.length) break;
      const count = Math.min(257 - head, size - done);
      out.fill(input[at++]!, done, done + count);
      done += count;
    }
  }
  return out.subarray(0, done);
}
