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

const thousandths = (share: number) => Math.round(1000 * share) / 1000;

/** Every vine with its zone, the zone that the run gave its ground and how surely: membership there, the next zone, and membership less that of the next. */
export function vineFeatures(input: Pick<ZoneExport, 'blockName' | 'madeAt' | 'vines'>): FeatureLayer {
  return {
    name: 'vines',
    title: `${input.blockName}: vines by zone`,
    madeAt: input.madeAt,
    fields: [
      { name: 'row', type: 'text' },
      { name: 'vine', type: 'integer' },
      { name: 'zone', type: 'integer' },
      { name: 'zone_name', type: 'text' },
      { name: 'run_zone', type: 'integer' },
      { name: 'membership', type: 'real', decimals: 3 },
      { name: 'next_zone', type: 'integer' },
      { name: 'certainty', type: 'real', decimals: 3 },
      { name: 'doubtful', type: 'text' },
    ],
    features: input.vines.map(({ rowLabel, vine, zone, zoneName, membership: of, isDoubtful, at }) => ({
      values: [rowLabel, vine, zone, zoneName, ...(of ? [of.runZone, thousandths(of.share), of.nextZone, thousandths(of.certainty)] : [null, null, null, null]), isDoubtful ? 'yes' : 'no'],
      shape: { kind: 'point', at },
    })),
  };
}
