import type { XY } from '../geo/coordinates.ts';

/**
 * An order past points where nothing bars the way, from `start` and back to `end`, or over at the last point without one:
 * the nearest point next (Rosenkrantz, Stearns & Lewis 1977, SIAM J. Comput. 6:563), then stretches turned round while
 * that shortens the way (2-opt, Croes 1958, Oper. Res. 6:791). A short way, not the shortest.
 * In: metres. Out: indexes of `points`; ties go to the lower index, so the same points give the same order.
 */
export function openOrder(points: readonly XY[], start: XY, end: XY | null): number[] {
  const order = nearestNext(points, start);
  const at = (place: number): XY | null => (place < 0 ? start : place < order.length ? points[order[place]!]! : end);
  const leg = (from: XY | null, to: XY | null) => (from === null || to === null ? 0 : Math.hypot(to[0] - from[0], to[1] - from[1]));
  for (let turned = true; turned; ) {
    turned = false;
    for (let i = 0; i < order.length - 1; i++) {
      for (let j = i + 1; j < order.length; j++) {
        const gain = leg(at(i - 1), at(i)) + leg(at(j), at(j + 1)) - leg(at(i - 1), at(j)) - leg(at(i), at(j + 1));
        if (gain <= LEAST_GAIN_M) continue;
        order.splice(i, j - i + 1, ...order.slice(i, j + 1).reverse());
        turned = true;
      }
    }
  }
  return order;
}

/** Less is rounding, and could turn the same stretch for ever. */
const LEAST_GAIN_M = 1e-6;

function nearestNext(points: readonly XY[], start: XY): number[] {
  const left = [...points.keys()];
  const order: number[] = [];
  for (let from = start; left.length > 0; from = points[order.at(-1)!]!) {
    const far = (index: number) => (points[index]![0] - from[0]) ** 2 + (points[index]![1] - from[1]) ** 2;
    const place = left.reduce((best, index, at) => (far(index) < far(left[best]!) ? at : best), 0);
    order.push(...left.splice(place, 1));
  }
  return order;
}
