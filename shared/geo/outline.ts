import { AnalysisError } from '../analysis/analysisError.ts';
import type { LonLat, MultiPolygonLonLat, PolygonLonLat } from './coordinates.ts';
import { ringCrossing } from './outlineCrossing.ts';
import { closeRing, polygonsArea, polygonsCentroid, windForGeoJson } from './rings.ts';
import { polygonsToUtm, utmEpsg } from './utm.ts';

/** An outline as GeoJSON brings it: positions may hold a height. */
export type OutlineGeometry =
  | { readonly type: 'Polygon'; readonly coordinates: readonly (readonly (readonly number[])[])[] }
  | { readonly type: 'MultiPolygon'; readonly coordinates: readonly (readonly (readonly (readonly number[])[])[])[] };

/** What was put in order without changing the shape. */
export interface Tidied {
  readonly what: 'closed' | 'repeatedCorners' | 'heights';
  readonly count: number;
}

export interface Outline {
  readonly polygons: MultiPolygonLonLat;
  readonly epsg: number;
  /** On the plane of the UTM zone. */
  readonly areaM2: number;
  readonly tidied: readonly Tidied[];
}

/** An outline that crosses itself; `place` and `corners` tell where. */
export class OutlineCrosses extends AnalysisError {
  readonly place: LonLat;
  readonly corners: readonly [number, number];

  constructor(place: LonLat, corners: readonly [number, number]) {
    super('outlineCrosses', `This outline crosses itself near ${shownPosition(place)}, between the corners ${corners[0]} and ${corners[1] + 1}. Move one of these corners.`);
    this.place = place;
    this.corners = corners;
  }
}

const outlineLimits = { leastHa: 0.01, mostHa: 1000, mostCorners: 20_000 } as const;

/**
 * A block's outline from GeoJSON: eight decimals, rings closed and wound, heights and repeated corners dropped, area on the
 * UTM plane.
 * Throws AnalysisError with place or value for an outline that crosses itself, is too small, too large or too detailed.
 */
export function readOutline(geometry: OutlineGeometry): Outline {
  const raw = geometry.type === 'Polygon' ? [geometry.coordinates] : geometry.coordinates;
  const corners = raw.reduce((sum, rings) => sum + rings.reduce((inner, ring) => inner + ring.length, 0), 0);
  if (corners > outlineLimits.mostCorners) {
    throw new AnalysisError('outlineTooDetailed', `This outline has ${corners} corners; at most ${outlineLimits.mostCorners} can be used. Simplify it first.`);
  }
  const counts = { closed: 0, repeatedCorners: 0, heights: 0 };
  const tidy = raw.map((rings) => rings.map((ring, at) => tidyRing(ring, at, counts)));
  for (const rings of tidy) {
    const crossing = ringCrossing(rings);
    if (crossing) throw new OutlineCrosses(crossing.place, crossing.corners);
  }
  const polygons = tidy.map((rings) => windForGeoJson(rings) as PolygonLonLat);
  const epsg = utmEpsg(polygonsCentroid(polygons));
  const areaM2 = polygonsArea(polygonsToUtm(polygons, epsg));
  checkArea(areaM2 / 10_000);
  const tidied = (Object.keys(counts) as Tidied['what'][]).filter((what) => counts[what] > 0).map((what) => ({ what, count: counts[what] }));
  return { polygons, epsg, areaM2, tidied };
}

function tidyRing(ring: readonly (readonly number[])[], at: number, counts: Record<Tidied['what'], number>): readonly LonLat[] {
  counts.heights += ring.filter((position) => position.length > 2).length;
  const flat = ring.map(([lon, lat]): LonLat => [rounded(lon!), rounded(lat!)]);
  const distinct = flat.filter((position, index) => index === 0 || position[0] !== flat[index - 1]![0] || position[1] !== flat[index - 1]![1]);
  counts.repeatedCorners += flat.length - distinct.length;
  const closed = closeRing(distinct);
  counts.closed += closed.length - distinct.length;
  if (closed.length < 4) throw new AnalysisError('outlineTooFewCorners', `Ring ${at + 1} of this outline has fewer than three different corners. Draw at least three.`);
  return closed;
}

/** Eight decimals, about a millimetre: what is stored, so that grid and rows come out the same whoever computes them. */
function rounded(degrees: number): number {
  return Math.round(degrees * 1e8) / 1e8;
}

function checkArea(areaHa: number): void {
  const { leastHa, mostHa } = outlineLimits;
  if (areaHa < leastHa) throw new AnalysisError('outlineTooSmall', `This outline holds ${(areaHa * 10_000).toFixed(1)} m²; a block needs at least ${leastHa * 10_000} m². Check its reference system, or draw it anew.`);
  if (areaHa > mostHa) throw new AnalysisError('outlineTooLarge', `This outline holds ${Math.round(areaHa)} ha; a block has at most ${mostHa} ha. Check its reference system, or cut it into blocks.`);
}

/** A position in words, five decimals (about a metre). `shownPosition([-1.8, 42.51])` is "42.51000° N, 1.80000° W". */
export function shownPosition([lon, lat]: LonLat): string {
  return `${Math.abs(lat).toFixed(5)}° ${lat < 0 ? 'S' : 'N'}, ${Math.abs(lon).toFixed(5)}° ${lon < 0 ? 'W' : 'E'}`;
}
