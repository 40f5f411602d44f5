import type { MultiPolygonLonLat } from './coordinates.ts';
import { lineBearing } from './rowFrame.ts';

/**
 * True bearing of the direction in which most of the outline runs, in [0, 180): the best first guess for rows. Sides are
 * gathered in steps of two degrees by their length; the answer is the length-weighted mean of the fullest step and its
 * neighbours. On a plane tangent at the outline's first corner. Null for an outline without length. Own rule.
 */
export function mainDirection(outline: MultiPolygonLonLat): number | null {
  const stepDeg = 2;
  const lengths = new Float64Array(180 / stepDeg);
  const sides = sidesOf(outline);
  for (const { bearingDeg, lengthM } of sides) lengths[Math.floor(bearingDeg / stepDeg) % lengths.length]! += lengthM;
  let fullest = -1;
  for (let step = 0; step < lengths.length; step++) if (lengths[step]! > 0 && (fullest < 0 || lengths[step]! > lengths[fullest]!)) fullest = step;
  if (fullest < 0) return null;
  const middleDeg = (fullest + 0.5) * stepDeg;
  let turn = 0;
  let weight = 0;
  for (const { bearingDeg, lengthM } of sides) {
    const away = ((bearingDeg - middleDeg + 270) % 180) - 90;
    if (Math.abs(away) > 1.5 * stepDeg) continue;
    turn += away * lengthM;
    weight += lengthM;
  }
  return lineBearing(middleDeg + turn / weight);
}

function sidesOf(outline: MultiPolygonLonLat): { bearingDeg: number; lengthM: number }[] {
  const first = outline[0]?.[0]?.[0];
  if (first === undefined) return [];
  const metresPerDegree = 111_320;
  const shrink = Math.cos((first[1] * Math.PI) / 180);
  return outline.flatMap((rings) =>
    (rings[0] ?? []).slice(1).flatMap((to, at) => {
      const from = rings[0]![at]!;
      const east = (to[0] - from[0]) * metresPerDegree * shrink;
      const north = (to[1] - from[1]) * metresPerDegree;
      const lengthM = Math.hypot(east, north);
      return lengthM === 0 ? [] : [{ bearingDeg: lineBearing((Math.atan2(east, north) * 180) / Math.PI), lengthM }];
    }),
  );
}
