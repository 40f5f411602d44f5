import type { RasterLayout } from './rasterLayout.ts';

/**
 * Pixel values of a block as plain numbers. Only three array types leave this file: a loop that meets more kinds
 * than the engine keeps apart becomes several times slower, and the copies here are native and cheap.
 */
export type SampleValues = Uint16Array | Float32Array | Float64Array;

/** Values of unpacked, native-endian bytes that start at the beginning of their buffer. Rows are padded to whole bytes. */
export function sampleValues(bytes: Uint8Array<ArrayBuffer>, layout: Pick<RasterLayout, 'bits' | 'format'>, samplesPerRow: number): SampleValues {
  const { bits, format } = layout;
  const { buffer } = bytes;
  const count = Math.floor((bytes.byteLength * 8) / bits);
  if (format === 'float') {
    if (bits === 16) return halfFloats(new Uint16Array(buffer, 0, count));
    return bits === 32 ? new Float32Array(buffer, 0, count) : new Float64Array(buffer, 0, count);
  }
  if (bits === 8) return format === 'int' ? Float32Array.from(new Int8Array(buffer, 0, count)) : Uint16Array.from(bytes);
  if (bits === 16) return format === 'int' ? new Float32Array(new Int16Array(buffer, 0, count)) : new Uint16Array(buffer, 0, count);
  if (bits === 32) return new Float64Array(format === 'int' ? new Int32Array(buffer, 0, count) : new Uint32Array(buffer, 0, count));
  if (bits === 64) return wideIntegers(format === 'int' ? new BigInt64Array(buffer, 0, count) : new BigUint64Array(buffer, 0, count));
  return packedIntegers(bytes, bits, samplesPerRow);
}

/** Whole numbers above 2^53 lose their last digits; no measured layer has them. */
function wideIntegers(values: BigInt64Array | BigUint64Array): Float64Array {
  const out = new Float64Array(values.length);
  for (let i = 0; i < out.length; i++) out[i] = Number(values[i]);
  return out;
}

/** IEEE 754 binary16. */
function halfFloats(values: Uint16Array): Float32Array {
  const out = new Float32Array(values.length);
  for (let i = 0; i < out.length; i++) {
    const half = values[i]!;
    const exponent = (half >> 10) & 31;
    const fraction = half & 1023;
    const size = exponent === 0 ? fraction * 2 ** -24 : exponent === 31 ? (fraction === 0 ? Infinity : NaN) : (1 + fraction / 1024) * 2 ** (exponent - 15);
    out[i] = half >= 0x8000 ? -size : size;
  }
  return out;
}

/** Values of 1 to 31 bits that are not whole bytes, most significant bit first, each row starting on a byte. */
function packedIntegers(bytes: Uint8Array, bits: number, samplesPerRow: number): SampleValues {
  const rowBytes = Math.ceil((samplesPerRow * bits) / 8);
  const rows = Math.floor(bytes.length / rowBytes);
  const out = bits <= 16 ? new Uint16Array(rows * samplesPerRow) : new Float64Array(rows * samplesPerRow);
  const mask = 2 ** bits;
  for (let row = 0, to = 0; row < rows; row++) {
    let at = row * rowBytes;
    let held = 0;
    let value = 0;
    for (let i = 0; i < samplesPerRow; i++) {
      while (held < bits) {
        // Below 2^39, so plain numbers keep every bit.
        value = value * 256 + bytes[at++]!;
        held += 8;
      }
      held -= bits;
      out[to++] = Math.floor(value / 2 ** held) % mask;
      value %= 2 ** held;
    }
  }
  return out;
}
