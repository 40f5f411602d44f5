/**
 * Two-dimensional discrete Fourier transform of a complex plane, rows by the fft.js library and columns by transposing.
 * Planes are flat arrays of 2 × width × height numbers (real, imaginary); width and height are powers of two.
 * A plane of two real fields (one as real part, one as imaginary part) halves the number of transforms.
 */

import FFT from 'fft.js';

export interface PlaneTransform {
  readonly width: number;
  readonly height: number;
  /** Unscaled forward transform of `plane`, written into `into` (a plane of the same size, by default a new one). */
  forward(plane: Float64Array, into?: Float64Array): Float64Array;
  /** Inverse transform, divided by width × height. */
  inverse(plane: Float64Array, into?: Float64Array): Float64Array;
}

/** Smallest power of two that holds `size`, at least 2. */
export function powerOfTwoAtLeast(size: number): number {
  return 2 ** Math.max(1, Math.ceil(Math.log2(size)));
}

/** Holds its own work space, so that twenty transforms in a row leave nothing to collect. */
export function createPlaneTransform(width: number, height: number): PlaneTransform {
  const alongRows = new FFT(width);
  const alongColumns = width === height ? alongRows : new FFT(height);
  const turned = new Float64Array(2 * width * height);
  const transform = (plane: Float64Array, into: Float64Array, inverse: boolean) => {
    transformRows(plane, turned, { fft: alongRows, width, height, inverse });
    transformRows(turned, into, { fft: alongColumns, width: height, height: width, inverse });
    return into;
  };
  return {
    width,
    height,
    forward: (plane, into = new Float64Array(plane.length)) => transform(plane, into, false),
    inverse: (plane, into = new Float64Array(plane.length)) => transform(plane, into, true),
  };
}

interface RowPass {
  readonly fft: FFT;
  readonly width: number;
  readonly height: number;
  readonly inverse: boolean;
}

/** Rows transformed together before they are written as columns: eight complex numbers fill whole cache lines. */
const ROWS_AT_ONCE = 8;

/** Transforms each row of `plane` and writes it as a column of `turned`. */
function transformRows(plane: Float64Array, turned: Float64Array, { fft, width, height, inverse }: RowPass): void {
  const line = new Float64Array(2 * width);
  const done = Array.from({ length: ROWS_AT_ONCE }, () => new Float64Array(2 * width));
  for (let first = 0; first < height; first += ROWS_AT_ONCE) {
    const rows = Math.min(ROWS_AT_ONCE, height - first);
    for (let r = 0; r < rows; r++) {
      const base = 2 * (first + r) * width;
      let filled = false;
      for (let i = 0; i < 2 * width; i++) {
        const value = plane[base + i]!;
        line[i] = value;
        if (value !== 0) filled = true;
      }
      // Half of a zero-padded plane is empty rows, whose transform is zero.
      if (!filled) done[r]!.fill(0);
      else if (inverse) fft.inverseTransform(done[r]!, line);
      else fft.transform(done[r]!, line);
    }
    for (let col = 0; col < width; col++) {
      const at = 2 * (col * height + first);
      for (let r = 0; r < rows; r++) {
        turned[at + 2 * r] = done[r]![2 * col]!;
        turned[at + 2 * r + 1] = done[r]![2 * col + 1]!;
      }
    }
  }
}
