import { geometryOf } from './features/geoJson.ts';
import type { ZoneExport } from './zoneExport.ts';

/** Zones as GeoJSON (RFC 7946), each with its number as id. */
export function zonesGeoJson(input: ZoneExport): Buffer {
  const features = input.zones.map(({ number, name, colour, areaM2, vines, missing, polygonsLonLat }) => ({
    type: 'Feature',
    id: number,
    properties: { block: input.blockName, zone: number, name, colour, area_ha: Math.round(areaM2) / 10_000, vines, missing, zoning: input.zoningNumber, zoning_name: input.zoningName, state: input.state },
    geometry: geometryOf({ kind: 'polygons', polygonsLonLat }),
  }));
  return Buffer.from(`${JSON.stringify({ type: 'FeatureCollection', features })}\n`, 'utf8');
}
