/** Areas of outlines given in degrees. */
import type { MultiPolygonLonLat } from './coordinates.ts';
import { polygonsArea, polygonsCentroid } from './rings.ts';
import { polygonsToUtm, toUtm, utmEpsg } from './utm.ts';

/** WGS 84: semi-major axis and squared first eccentricity. */
const A_M = 6_378_137;
const E2 = 0.00669437999014;

/** Plane area in the metres of the outline's UTM zone, hectares: what zones and rows of the block add up to. */
export function planeAreaHa(boundaryLonLat: MultiPolygonLonLat): number {
  return polygonsArea(polygonsToUtm(boundaryLonLat, utmEpsg(polygonsCentroid(boundaryLonLat)))) / 10_000;
}

/** Area on the ellipsoid, hectares: the plane area without the scale of the projection at the outline's middle. */
export function groundAreaHa(boundaryLonLat: MultiPolygonLonLat): number {
  return planeAreaHa(boundaryLonLat) / utmAreaScale(boundaryLonLat);
}

/**
 * Plane area per true area at the middle of an outline, 0.9992 on the zone's central meridian. From the projection's own
 * steps against the radii of curvature of the ellipsoid (meridian and prime vertical; Snyder 1987, eq. 4-18 and 4-20).
 */
export function utmAreaScale(boundaryLonLat: MultiPolygonLonLat): number {
  const [lon, lat] = polygonsCentroid(boundaryLonLat);
  const epsg = utmEpsg([lon, lat]);
  const stepDeg = 1e-4;
  const [westX, westY] = toUtm([lon - stepDeg, lat], epsg);
  const [eastX, eastY] = toUtm([lon + stepDeg, lat], epsg);
  const [southX, southY] = toUtm([lon, lat - stepDeg], epsg);
  const [northX, northY] = toUtm([lon, lat + stepDeg], epsg);
  const plane = (eastX - westX) * (northY - southY) - (northX - southX) * (eastY - westY);
  const phi = (lat * Math.PI) / 180;
  const root = Math.sqrt(1 - E2 * Math.sin(phi) ** 2);
  const meridianM = (A_M * (1 - E2)) / root ** 3;
  const parallelM = (A_M / root) * Math.cos(phi);
  const step = (2 * stepDeg * Math.PI) / 180;
  return plane / (meridianM * parallelM * step * step);
}
