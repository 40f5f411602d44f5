/*
 * Undoing TIFF predictors in place. Predictor 2: TIFF 6.0, section 14 (differences of whole numbers, wrapping).
 * Predictor 3: Adobe TIFF Technical Note 3 (bytes of floats sorted into planes, most significant first, then differences).
 */

import { addAlongRows } from './runningSums.ts';

type Wrapping = Uint8Array | Uint16Array | Uint32Array;

/** Samples of one row, their distance to the left neighbour of the same band, and bytes of a sample. */
export interface RowShape {
  samplesPerRow: number;
  stride: number;
  bytesPerSample: number;
}

/** Predictor 2 over native-endian bytes. Typed arrays wrap by themselves, as the encoder did. */
export function undoDifferences(bytes: Uint8Array<ArrayBuffer>, { samplesPerRow, stride, bytesPerSample }: RowShape): void {
  const count = Math.floor(bytes.byteLength / bytesPerSample);
  if (bytesPerSample === 8) {
    const wide = new BigUint64Array(bytes.buffer, bytes.byteOffset, count);
    for (let row = 0; row < count; row += samplesPerRow) {
      const end = Math.min(count, row + samplesPerRow);
      for (let i = row + stride; i < end; i++) wide[i] = wide[i]! + wide[i - stride]!;
    }
    return;
  }
  const samples: Wrapping =
    bytesPerSample === 1
      ? bytes
      : bytesPerSample === 2
        ? new Uint16Array(bytes.buffer, bytes.byteOffset, count)
        : new Uint32Array(bytes.buffer, bytes.byteOffset, count);
  if (samples instanceof Uint16Array && addAlongRows(samples, samplesPerRow, stride)) return;
  for (let row = 0; row < count; row += samplesPerRow) {
    const end = Math.min(count, row + samplesPerRow);
    addDifferences(samples, row, { end, stride });
  }
}

function addDifferences(samples: Wrapping, from: number, { end, stride }: { end: number; stride: number }): void {
  if (stride === 2) addPairs(samples, from, end);
  else for (let band = 0; band < stride; band++) addUp(samples, from + band, { end, stride });
}

/** Running sums wrap at 32 bits, whose lower bits are those of any narrower sample. Kept beside the array they are added much sooner. */
function addUp(samples: Wrapping, from: number, { end, stride }: { end: number; stride: number }): void {
  let sum = 0;
  for (let i = from; i < end; i += stride) {
    sum = (sum + samples[i]!) | 0;
    samples[i] = sum;
  }
}

/** Two bands, as most pictures with red and near infrared have. */
function addPairs(samples: Wrapping, from: number, end: number): void {
  let first = 0;
  let second = 0;
  let i = from;
  for (; i + 1 < end; i += 2) {
    first = (first + samples[i]!) | 0;
    second = (second + samples[i + 1]!) | 0;
    samples[i] = first;
    samples[i + 1] = second;
  }
  if (i < end) samples[i] = first + samples[i]!;
}

/** Predictor 3: returns native (little-endian) floats; the byte order of the file does not matter. */
export function undoFloatDifferences(bytes: Uint8Array<ArrayBuffer>, { samplesPerRow, stride, bytesPerSample }: RowShape): Uint8Array<ArrayBuffer> {
  const rowBytes = samplesPerRow * bytesPerSample;
  const out = new Uint8Array(bytes.byteLength);
  const wide = bytesPerSample === 4 ? new Uint32Array(out.buffer, 0, bytes.byteLength >> 2) : null;
  for (let row = 0; row + rowBytes <= bytes.byteLength; row += rowBytes) {
    addDifferences(bytes, row, { end: row + rowBytes, stride });
    if (wide !== null) {
      joinPlanes(bytes, row, wide.subarray((row / rowBytes) * samplesPerRow, (row / rowBytes + 1) * samplesPerRow));
      continue;
    }
    for (let byte = 0; byte < bytesPerSample; byte++) {
      const plane = row + (bytesPerSample - 1 - byte) * samplesPerRow;
      for (let sample = 0, to = row + byte; sample < samplesPerRow; sample++, to += bytesPerSample) out[to] = bytes[plane + sample]!;
    }
  }
  return out;
}

/** The four planes of a row of 32-bit floats, put together a sample at a time. */
function joinPlanes(bytes: Uint8Array, row: number, out: Uint32Array): void {
  const count = out.length;
  for (let sample = 0, at = row; sample < count; sample++, at++) {
    out[sample] = (bytes[at]! << 24) | (bytes[at + count]! << 16) | (bytes[at + 2 * count]! << 8) | bytes[at + 3 * count]!;
  }
}
