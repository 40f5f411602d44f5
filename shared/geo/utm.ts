/**
 * Universal Transverse Mercator on WGS 84: one zone for a whole property, never one block in two zones.
 * The projection itself is proj4's; zone limits and exceptions as in the UTM/MGRS definition (NGA.SIG.0012), from memory.
 */
import proj4 from 'proj4';
import { AnalysisError } from '../analysis/analysisError.ts';
import type { LonLat, MultiPolygonLonLat, MultiPolygonXY, XY } from './coordinates.ts';

interface Projection {
  readonly forward: (lonLat: [number, number]) => [number, number];
  readonly inverse: (xy: [number, number]) => [number, number];
}

const projections = new Map<number, Projection>();

/**
 * UTM zone number 1–60, with the widened zone 32 of south-west Norway and the four zones of Svalbard.
 * `utmZone([5.32, 60.39])` is 32, not 31.
 */
export function utmZone(lonLat: LonLat): number {
  const lon = ((((lonLat[0] + 180) % 360) + 360) % 360) - 180;
  const lat = lonLat[1];
  if (lat >= 56 && lat < 64 && lon >= 3 && lon < 12) return 32;
  if (lat >= 72 && lat <= 84 && lon >= 0 && lon < 42) return lon < 9 ? 31 : lon < 21 ? 33 : lon < 33 ? 35 : 37;
  return Math.floor((lon + 180) / 6) + 1;
}

/** EPSG code of the UTM zone of a position: 326zz north of the equator, 327zz south of it. */
export function utmEpsg(lonLat: LonLat): number {
  if (!(Math.abs(lonLat[1]) <= 84) || !Number.isFinite(lonLat[0])) {
    throw new AnalysisError('position-outside-utm', `Position ${lonLat[0]}, ${lonLat[1]} is not a longitude and latitude that UTM covers; give degrees, longitude first.`);
  }
  return (lonLat[1] >= 0 ? 32600 : 32700) + utmZone(lonLat);
}

/** proj4 text of a UTM zone given by its EPSG code, for callers who build a transformation from another system. */
export function utmDefinition(epsg: number): string {
  const zone = epsg % 100;
  const hemisphere = Math.floor(epsg / 100);
  if (zone < 1 || zone > 60 || (hemisphere !== 326 && hemisphere !== 327)) {
    throw new AnalysisError('not-utm', `EPSG:${epsg} is not a UTM zone on WGS 84; use 32601–32660 or 32701–32760.`);
  }
  return `+proj=utm +zone=${zone}${hemisphere === 327 ? ' +south' : ''} +datum=WGS84 +units=m +no_defs`;
}

/** Easting and northing in metres. `toUtm([-122.2869, 38.2975], 32610)` is 562354.881, 4239064.589. */
export function toUtm(lonLat: LonLat, epsg: number): XY {
  return projectionOf(epsg).forward([lonLat[0], lonLat[1]]);
}

/** Longitude and latitude in degrees of an easting and northing. */
export function fromUtm(xy: XY, epsg: number): LonLat {
  return projectionOf(epsg).inverse([xy[0], xy[1]]);
}

export function polygonsToUtm(polygons: MultiPolygonLonLat, epsg: number): MultiPolygonXY {
  return polygons.map((rings) => rings.map((ring) => ring.map((lonLat) => toUtm(lonLat, epsg))));
}

export function polygonsFromUtm(polygons: MultiPolygonXY, epsg: number): MultiPolygonLonLat {
  return polygons.map((rings) => rings.map((ring) => ring.map((xy) => fromUtm(xy, epsg))));
}

/**
 * Angle in degrees from true north to grid north, positive where grid north lies east: grid bearing = true − convergence.
 * Taken from the projection by a step of latitude to each side; the spherical formula atan(tan(λ−λ₀)·sin φ) differs by
 * about 4e-6 degrees.
 */
export function convergenceDeg(lonLat: LonLat, epsg: number): number {
  const stepDeg = 1e-4;
  const [southX, southY] = toUtm([lonLat[0], lonLat[1] - stepDeg], epsg);
  const [northX, northY] = toUtm([lonLat[0], lonLat[1] + stepDeg], epsg);
  return (-Math.atan2(northX - southX, northY - southY) * 180) / Math.PI;
}

function projectionOf(epsg: number): Projection {
  const known = projections.get(epsg);
  if (known !== undefined) return known;
  const made = proj4(utmDefinition(epsg));
  projections.set(epsg, made);
  return made;
}
