/** Closed walks of one zone put together as polygons: each hole into the smallest ring that holds it. */
import { boundsHold, boundsOf } from '../geo/bounds.ts';
import type { XY } from '../geo/coordinates.ts';
import { signedArea } from '../geo/rings.ts';
import { ringOf, type Walk } from './polygoniseFaces.ts';

export interface ZoneRing {
  readonly walk: Walk;
  readonly ring: readonly XY[];
  /** Positive for an outer ring, negative for a hole. */
  readonly areaM2: number;
}

/** Outer ring first, then its holes; polygons from the largest to the smallest. */
export function nestRings(walks: readonly Walk[]): ZoneRing[][] {
  const rings = walks.map((walk): ZoneRing => {
    const ring = ringOf(walk, ({ points }) => points);
    return { walk, ring, areaM2: signedArea(ring) };
  });
  const outers = rings.filter(({ areaM2 }) => areaM2 > 0).sort((a, b) => b.areaM2 - a.areaM2);
  const polygons = outers.map((outer) => ({ outer, bounds: boundsOf([outer.ring]), holes: [] as ZoneRing[] }));
  for (const hole of rings) {
    if (hole.areaM2 > 0) continue;
    const bounds = boundsOf([hole.ring]);
    const around = polygons.filter((polygon) => polygon.outer.areaM2 > -hole.areaM2 && boundsHold(polygon.bounds, bounds));
    const home = around.length === 1 ? around[0] : around.findLast(({ outer }) => holdsPoint(outer.ring, hole.ring[0]!));
    if (home === undefined) throw new Error('A hole lies in no zone.');
    home.holes.push(hole);
  }
  return polygons.map(({ outer, holes }) => [outer, ...holes]);
}

function holdsPoint(ring: readonly XY[], [x, y]: XY): boolean {
  let isInside = false;
  for (let at = 0; at + 1 < ring.length; at++) {
    const [px, py] = ring[at]!;
    const [qx, qy] = ring[at + 1]!;
    if (py > y !== qy > y && x < px + ((y - py) / (qy - py)) * (qx - px)) isInside = !isInside;
  }
  return isInside;
}
