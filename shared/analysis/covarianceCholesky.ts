/**
 * Cholesky factor of a small symmetric positive definite matrix and solution of its linear system (textbook method).
 * Matrices are flat, row after row.
 */

/** Lower triangle L with L·Lᵀ = matrix, written into `lower` (by default a new array). A pivot that rounding made negative counts as zero (its column is left out). */
export function choleskyFactor(matrix: ArrayLike<number>, size: number, lower = new Float64Array(size * size)): Float64Array {
  for (let row = 0; row < size; row++) {
    for (let col = 0; col <= row; col++) {
      let sum = matrix[row * size + col]!;
      for (let j = 0; j < col; j++) sum -= lower[row * size + j]! * lower[col * size + j]!;
      if (row === col) lower[row * size + col] = Math.sqrt(Math.max(0, sum));
      else lower[row * size + col] = lower[col * size + col]! > 1e-12 ? sum / lower[col * size + col]! : 0;
    }
  }
  return lower;
}

/** x with matrix·x = right; a left-out column gives 0. */
export function solveSymmetric(matrix: ArrayLike<number>, right: ArrayLike<number>): Float64Array {
  const size = right.length;
  const lower = choleskyFactor(matrix, size);
  const x = Float64Array.from({ length: size }, (_, i) => right[i]!);
  for (let row = 0; row < size; row++) {
    for (let j = 0; j < row; j++) x[row] = x[row]! - lower[row * size + j]! * x[j]!;
    x[row] = dividedByPivot(x[row]!, lower[row * size + row]!);
  }
  for (let row = size - 1; row >= 0; row--) {
    for (let j = row + 1; j < size; j++) x[row] = x[row]! - lower[j * size + row]! * x[j]!;
    x[row] = dividedByPivot(x[row]!, lower[row * size + row]!);
  }
  return x;
}

function dividedByPivot(value: number, pivot: number): number {
  return pivot > 1e-12 ? value / pivot : 0;
}
