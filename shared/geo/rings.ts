/** Closed rings (first position repeated at the end): area, winding, centroid. Works for degrees and metres alike. */

/** Any ring: of LonLat or of XY. */
export type AnyRing = readonly (readonly [number, number])[];

/**
 * Shoelace area; above 0 for counter-clockwise. Coordinates are taken relative to the first position, which keeps the
 * digits of a small ring far from the origin. `signedArea([[0,0],[120,0],[120,80],[60,110],[0,80],[0,0]])` is 11400.
 */
export function signedArea(ring: AnyRing): number {
  const [x0, y0] = ring[0] ?? [0, 0];
  let twice = 0;
  for (let at = 0; at + 1 < ring.length; at++) {
    const [ax, ay] = ring[at]!;
    const [bx, by] = ring[at + 1]!;
    twice += (ax - x0) * (by - y0) - (bx - x0) * (ay - y0);
  }
  return twice / 2;
}

/** Area of a polygon or several, outer rings less holes, whatever the winding. */
export function polygonsArea(polygons: readonly (readonly AnyRing[])[]): number {
  let area = 0;
  for (const rings of polygons) rings.forEach((ring, index) => (area += (index === 0 ? 1 : -1) * Math.abs(signedArea(ring))));
  return area;
}

/** Area centroid of a ring; the mean of its positions when it has no area. */
export function ringCentroid(ring: AnyRing): [number, number] {
  const [x0, y0] = ring[0] ?? [NaN, NaN];
  let twice = 0;
  let sumX = 0;
  let sumY = 0;
  for (let at = 0; at + 1 < ring.length; at++) {
    const [ax, ay] = [ring[at]![0] - x0, ring[at]![1] - y0];
    const [bx, by] = [ring[at + 1]![0] - x0, ring[at + 1]![1] - y0];
    const cross = ax * by - bx * ay;
    twice += cross;
    sumX += (ax + bx) * cross;
    sumY += (ay + by) * cross;
  }
  if (twice !== 0) return [x0 + sumX / (3 * twice), y0 + sumY / (3 * twice)];
  const corners = ring.slice(0, Math.max(1, ring.length - 1));
  const mean = (axis: 0 | 1) => corners.reduce((sum, position) => sum + position[axis], 0) / corners.length;
  return [mean(0), mean(1)];
}

/** Area centroid of several polygons, holes taken off. */
export function polygonsCentroid(polygons: readonly (readonly AnyRing[])[]): [number, number] {
  let area = 0;
  let x = 0;
  let y = 0;
  const origin = polygons[0]?.[0]?.[0] ?? [NaN, NaN];
  for (const rings of polygons) {
    rings.forEach((ring, index) => {
      const weight = (index === 0 ? 1 : -1) * Math.abs(signedArea(ring));
      const [cx, cy] = ringCentroid(ring);
      area += weight;
      x += weight * (cx - origin[0]);
      y += weight * (cy - origin[1]);
    });
  }
  if (area === 0) return ringCentroid(polygons[0]?.[0] ?? []);
  return [origin[0] + x / area, origin[1] + y / area];
}

export function isClosed(ring: AnyRing): boolean {
  const first = ring[0];
  const last = ring[ring.length - 1];
  return ring.length >= 4 && first !== undefined && last !== undefined && first[0] === last[0] && first[1] === last[1];
}

/** The ring with its first position repeated at the end, if it was not. */
export function closeRing<P extends readonly [number, number]>(ring: readonly P[]): readonly P[] {
  const first = ring[0];
  const last = ring[ring.length - 1];
  if (first === undefined || last === undefined || (first[0] === last[0] && first[1] === last[1])) return ring;
  return [...ring, first];
}

/** Outer ring counter-clockwise, holes clockwise (RFC 7946 §3.1.6; also KML). */
export function windForGeoJson<P extends readonly [number, number]>(rings: readonly (readonly P[])[]): readonly (readonly P[])[] {
  return rings.map((ring, index) => wound(ring, index === 0 ? 1 : -1));
}

/** Outer ring clockwise, holes counter-clockwise (ESRI Shapefile Technical Description, July 1998). */
export function windForShapefile<P extends readonly [number, number]>(rings: readonly (readonly P[])[]): readonly (readonly P[])[] {
  return rings.map((ring, index) => wound(ring, index === 0 ? -1 : 1));
}

function wound<P extends readonly [number, number]>(ring: readonly P[], sign: 1 | -1): readonly P[] {
  return signedArea(ring) * sign < 0 ? [...ring].reverse() : ring;
}
