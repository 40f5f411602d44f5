import type { FeatureLayer } from './features/featureLayer.ts';
import type { ZoneExport } from './zoneExport.ts';

/** The zones with what belongs to them, for a table beside the shapes. */
export function zoneFeatures(input: ZoneExport): FeatureLayer {
  return {
    name: 'zones',
    title: `${input.blockName}: ${input.zoningName || `zoning ${input.zoningNumber}`}`,
    madeAt: input.madeAt,
    fields: [
      { name: 'zone', type: 'integer' },
      { name: 'name', type: 'text' },
      { name: 'block', type: 'text' },
      { name: 'area_ha', type: 'real', decimals: 4 },
      { name: 'vines', type: 'integer' },
      { name: 'missing', type: 'integer' },
      { name: 'colour', type: 'text' },
      { name: 'zoning', type: 'integer' },
      { name: 'run_name', type: 'text' },
      { name: 'state', type: 'text' },
    ],
    features: input.zones.map(({ number, name, areaM2, vines, missing, colour, polygonsLonLat }) => ({
      values: [number, name, input.blockName, Math.round(areaM2) / 10_000, vines, missing, colour, input.zoningNumber, input.zoningName, input.state],
      shape: { kind: 'polygons', polygonsLonLat },
    })),
  };
}

/** The rows cut where the zone changes, in the numbers that the posts carry. */
export function rowFeatures(input: ZoneExport): FeatureLayer {
  return {
    name: 'rows',
    title: `${input.blockName}: rows by zone`,
    madeAt: input.madeAt,
    fields: [
      { name: 'row', type: 'text' },
      { name: 'from_vine', type: 'integer' },
      { name: 'to_vine', type: 'integer' },
      { name: 'zone', type: 'integer' },
      { name: 'zone_name', type: 'text' },
    ],
    features: input.runs.map(({ rowLabel, fromVine, toVine, zone, zoneName, linesLonLat }) => ({ values: [rowLabel, fromVine, toVine, zone, zoneName], shape: { kind: 'lines', linesLonLat } })),
  };
}
