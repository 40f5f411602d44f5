import { closeRing, windForGeoJson } from '../../shared/geo/rings.ts';
import type { ZoneExport } from './zoneExport.ts';

/** Eight decimals of a degree are about a millimetre. */
const scale = 1e8;

/** Zones as GeoJSON (RFC 7946): longitude first, closed rings, outer rings counter-clockwise, no crs member. */
export function zonesGeoJson(input: ZoneExport): Buffer {
  const features = input.zones.map(({ number, name, colour, areaM2, vines, missing, polygonsLonLat }) => ({
    type: 'Feature',
    id: number,
    properties: { block: input.blockName, zone: number, name, colour, area_ha: Math.round(areaM2) / 10_000, vines, missing, zoning: input.zoningNumber, zoning_name: input.zoningName, state: input.state },
    geometry: {
      type: 'MultiPolygon',
      coordinates: polygonsLonLat.map((polygon) => windForGeoJson(polygon.map(closeRing)).map((ring) => ring.map(([lon, lat]) => [Math.round(lon * scale) / scale, Math.round(lat * scale) / scale]))),
    },
  }));
  return Buffer.from(`${JSON.stringify({ type: 'FeatureCollection', features })}\n`, 'utf8');
}
