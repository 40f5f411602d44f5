/**
 * Faces of the network of pieces: every piece is walked once in each direction, turning at each node into the nearest piece
 * to the right, which keeps the same face on the left. In: pieces. Out: closed walks with their face's zone.
 * Method: half-edge traversal of a planar subdivision (de Berg et al., Computational Geometry, ch. 2).
 */
import type { XY } from '../geo/coordinates.ts';
import type { Piece } from './polygoniseCut.ts';

/** One direction of a piece. */
export interface Step {
  readonly piece: Piece;
  readonly isForward: boolean;
}

/** A closed walk with one face to its left: counter-clockwise around a face, clockwise around a hole in one. */
export interface Walk {
  readonly steps: readonly Step[];
  /** Zone of the face, null when the walk touches the outline only. */
  readonly zone: number | null;
}

/** Walks around everything inside the outline; throws when two borders of one face disagree about its zone. */
export function walkFaces(pieces: readonly Piece[]): Walk[] {
  const steps = pieces.flatMap((piece): Step[] => [
    { piece, isForward: true },
    { piece, isForward: false },
  ]);
  const onward = nextSteps(steps);
  const isWalked = new Uint8Array(steps.length);
  const walks: Walk[] = [];
  steps.forEach(({ piece, isForward }, start) => {
    if (isWalked[start] === 1 || (piece.isOutline && !isForward)) return;
    const walk: Step[] = [];
    for (let at = start; isWalked[at] === 0; at = onward[at]!) {
      isWalked[at] = 1;
      walk.push(steps[at]!);
    }
    walks.push({ steps: walk, zone: zoneOf(walk) });
  });
  return walks;
}

/** Number of the step that follows each step: at its end, the first to the clockwise of the way back. */
function nextSteps(steps: readonly Step[]): Int32Array {
  const leaving = new Map<string, number[]>();
  steps.forEach(({ piece, isForward }, step) => {
    const node = isForward ? piece.from : piece.to;
    const list = leaving.get(node);
    if (list === undefined) leaving.set(node, [step]);
    else list.push(step);
  });
  const onward = new Int32Array(steps.length).fill(-1);
  const bearings = Float64Array.from(steps, bearingOf);
  for (const list of leaving.values()) {
    const clockwise = list.sort((a, b) => bearings[b]! - bearings[a]! || a - b);
    clockwise.forEach((step, index) => (onward[step ^ 1] = clockwise[(index + 1) % clockwise.length]!));
  }
  return onward;
}

function bearingOf({ piece: { points }, isForward }: Step): number {
  const [a, b]: readonly XY[] = isForward ? points : [points[points.length - 1]!, points[points.length - 2]!];
  return Math.atan2(b![1] - a![1], b![0] - a![0]);
}

function zoneOf(walk: readonly Step[]): number | null {
  let zone: number | null = null;
  for (const { piece, isForward } of walk) {
    if (piece.isOutline && !isForward) throw new Error('A walk around a zone left the block.');
    const beside = isForward ? piece.left : piece.right;
    if (beside === null) continue;
    if (zone !== null && beside !== zone) throw new Error('The borders around one piece of ground name different zones.');
    zone = beside;
  }
  return zone;
}

/** Points of a walk, first repeated at the end. */
export function ringOf<P>(walk: Walk, pointsOf: (piece: Piece) => readonly P[]): P[] {
  const ring: P[] = [];
  for (const { piece, isForward } of walk.steps) {
    const points = pointsOf(piece);
    if (isForward) for (let at = 0; at < points.length - 1; at++) ring.push(points[at]!);
    else for (let at = points.length - 1; at > 0; at--) ring.push(points[at]!);
  }
  if (ring.length > 0) ring.push(ring[0]!);
  return ring;
}
