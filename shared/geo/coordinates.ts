/**
 * Positions on the ground, in two frames that must never be mixed.
 * The optional `frame` exists only for the type checker: a LonLat is not assignable to an XY.
 */

/** WGS 84 longitude and latitude in degrees, in GeoJSON order. */
export type LonLat = readonly [lon: number, lat: number] & { readonly frame?: 'lonlat' };

/** Easting and northing in metres, in the block's UTM zone. */
export type XY = readonly [x: number, y: number] & { readonly frame?: 'xy' };

/** Closed ring (first position repeated at the end). */
export type RingLonLat = readonly LonLat[];
export type RingXY = readonly XY[];

/** Outer ring first, then holes. */
export type PolygonLonLat = readonly RingLonLat[];
export type PolygonXY = readonly RingXY[];

export type MultiPolygonLonLat = readonly PolygonLonLat[];
export type MultiPolygonXY = readonly PolygonXY[];

/** West, south, east, north. */
export type Bounds = readonly [minX: number, minY: number, maxX: number, maxY: number];
