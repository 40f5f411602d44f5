/** Eigenvectors of small symmetric matrices by Jacobi's rotations (textbook method), exact for the few columns of layers. Matrices are flat, row after row. */

/** Unit eigenvectors with their eigenvalues, largest first, of a symmetric matrix. */
export function eigenOf(matrix: Float64Array, size: number): { vectors: Float64Array[]; values: number[] } {
  const work = matrix.slice();
  const vectors = Float64Array.from({ length: size * size }, (_, at) => (at % (size + 1) === 0 ? 1 : 0));
  for (let sweep = 0; sweep < 60; sweep++) {
    let off = 0;
    for (let a = 0; a < size; a++) for (let b = 0; b < a; b++) off += work[a * size + b]! ** 2;
    if (off < 1e-24) break;
    for (let a = 1; a < size; a++) for (let b = 0; b < a; b++) rotate(work, vectors, { size, a, b });
  }
  const order = Array.from({ length: size }, (_, at) => at).sort((a, b) => work[b * size + b]! - work[a * size + a]!);
  return {
    values: order.map((at) => work[at * size + at]!),
    vectors: order.map((at) => withPositiveLargest(Float64Array.from({ length: size }, (_, row) => vectors[row * size + at]!))),
  };
}

/** One Jacobi rotation in place that makes the element (a, b) zero. */
function rotate(work: Float64Array, vectors: Float64Array, { size, a, b }: { size: number; a: number; b: number }): void {
  const element = work[a * size + b]!;
  if (Math.abs(element) < 1e-300) return;
  const theta = (work[b * size + b]! - work[a * size + a]!) / (2 * element);
  const tangent = (theta >= 0 ? 1 : -1) / (Math.abs(theta) + Math.sqrt(theta * theta + 1));
  const cosine = 1 / Math.sqrt(tangent * tangent + 1);
  const sine = tangent * cosine;
  const turn = (array: Float64Array, atA: number, atB: number) => {
    const first = array[atA]!;
    const second = array[atB]!;
    array[atA] = cosine * first - sine * second;
    array[atB] = sine * first + cosine * second;
  };
  for (let i = 0; i < size; i++) turn(work, i * size + a, i * size + b);
  for (let i = 0; i < size; i++) turn(work, a * size + i, b * size + i);
  for (let i = 0; i < size; i++) turn(vectors, i * size + a, i * size + b);
}

/** Fixes the sign, which an eigenvector leaves open, so that results do not flip between runs. */
function withPositiveLargest(vector: Float64Array): Float64Array {
  const largest = vector.reduce((most, value) => (Math.abs(value) > Math.abs(most) ? value : most), 0);
  return largest < 0 ? vector.map((value) => -value) : vector;
}
