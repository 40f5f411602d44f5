/**
 * Tongues and strips of a zone that are too narrow to work join what lies beside them. In: labels, 0 outside. Out: labels; no
 * cell becomes or leaves 0. A zone that is nowhere wide enough leaves altogether. Cost: cells, plus those of `wideCells`.
 */
import type { Labels } from './grid.ts';
import { wideCells, type Width } from './labelsWidth.ts';

/** Labels in which nothing narrower than the width is left; as they were when nothing is wide enough. */
export function withoutNarrow(labels: Labels, cols: number, width: Width): Labels {
  const isSettled = wideCells(labels, cols, width);
  if (!isSettled.includes(1)) return new Uint8Array(labels);
  const out = new Uint8Array(labels);
  // A disc does not reach into the corners of a wide zone; they lie within 0.41 of its radius and stay.
  let front = keepNear(labels, cols, isSettled, Math.ceil(width.widthM / 4 / width.cellSizeM));
  while (front.length > 0) {
    const taken = front.map((cell) => commonNeighbour(out, cols, isSettled, cell));
    front.forEach((cell, i) => {
      out[cell] = taken[i]!;
      isSettled[cell] = 1;
    });
    front = unsettledBeside(labels, cols, isSettled, front);
  }
  return out;
}

/** Grows each zone's wide part back into its own ground by so many steps; answers the cells beside that are still open. */
function keepNear(labels: Labels, cols: number, isSettled: Uint8Array, steps: number): number[] {
  let edge = Array.from(isSettled.keys()).filter((cell) => isSettled[cell] === 1);
  for (let step = 0; step < steps; step++) {
    const next = new Set<number>();
    for (const cell of edge) for (const near of besides(cell, cols, labels.length)) if (isSettled[near] === 0 && labels[near] === labels[cell]) next.add(near);
    for (const cell of next) isSettled[cell] = 1;
    edge = [...next];
  }
  return unsettledBeside(labels, cols, isSettled, Array.from(isSettled.keys()).filter((cell) => isSettled[cell] === 1));
}

function unsettledBeside(labels: Labels, cols: number, isSettled: Uint8Array, cells: readonly number[]): number[] {
  const found = new Set<number>();
  for (const cell of cells) for (const near of besides(cell, cols, labels.length)) if (labels[near]! > 0 && isSettled[near] === 0) found.add(near);
  return [...found].sort((a, b) => a - b);
}

/** The label most of the settled neighbours have; the lower one of a tie. */
function commonNeighbour(labels: Labels, cols: number, isSettled: Uint8Array, cell: number): number {
  const votes = new Map<number, number>();
  for (const near of besides(cell, cols, labels.length)) if (isSettled[near] === 1 && labels[near]! > 0) votes.set(labels[near]!, (votes.get(labels[near]!) ?? 0) + 1);
  return [...votes].reduce((best, vote) => (vote[1] > best[1] || (vote[1] === best[1] && vote[0] < best[0]) ? vote : best), [labels[cell]!, 0])[0];
}

function besides(cell: number, cols: number, length: number): number[] {
  const col = cell % cols;
  return [col > 0 ? cell - 1 : -1, col < cols - 1 ? cell + 1 : -1, cell - cols, cell + cols].filter((near) => near >= 0 && near < length);
}
