import type { LonLat } from '../../../shared/geo/coordinates.ts';

/** Great-circle distance in kilometres on a sphere of 6371.0088 km (mean radius of the Earth, IUGG). */
export function distanceKm(a: LonLat, b: LonLat): number {
  const rad = Math.PI / 180;
  const half = Math.sin(((b[1] - a[1]) * rad) / 2) ** 2 + Math.cos(a[1] * rad) * Math.cos(b[1] * rad) * Math.sin(((b[0] - a[0]) * rad) / 2) ** 2;
  return 2 * 6371.0088 * Math.asin(Math.min(1, Math.sqrt(half)));
}
