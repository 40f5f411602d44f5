/** Boxes around shapes: west, south, east, north, in degrees or metres as the shape is. */
import type { Bounds } from './coordinates.ts';
import type { AnyRing } from './rings.ts';

/** Box around rings; infinite and empty when there is no position. */
export function boundsOf(rings: readonly AnyRing[]): Bounds {
  let [minX, minY, maxX, maxY] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const ring of rings) {
    for (const [x, y] of ring) {
      minX = Math.min(minX, x);
      minY = Math.min(minY, y);
      maxX = Math.max(maxX, x);
      maxY = Math.max(maxY, y);
    }
  }
  return [minX, minY, maxX, maxY];
}

/** True when the second box lies in the first. */
export function boundsHold(outer: Bounds, inner: Bounds): boolean {
  return outer[0] <= inner[0] && outer[1] <= inner[1] && outer[2] >= inner[2] && outer[3] >= inner[3];
}
