import type { FeatureCollection, MultiPolygon } from 'geojson';
import type { Access } from '../../access/access.ts';
import { zonesInForce } from '../../ground/zonesInForce.ts';
import { asGeoJson } from '../../models/geometry.ts';
import { Zone } from '../../models/Zone.ts';

/** Zones in force over the estate, for the map of all blocks: one set a block. */
export async function liveZones(access: Access): Promise<FeatureCollection<MultiPolygon>> {
  const rows = (await Zone.query()
    .where('zones.estateId', access.estateId)
    .join('zonings', 'zonings.id', 'zones.zoningId')
    .whereIn('zones.zoningId', zonesInForce(access.estateId).select('zonings.id'))
    .orderBy('zones.number')
    .select('zones.id', 'zones.number', 'zones.name', 'zones.colour', 'zones.areaM2', 'zones.vineCount', 'zones.zoningId', 'zonings.blockId', asGeoJson('zones.geometry').as('geometry'))) as unknown as (Zone & { blockId: string })[];
  return {
    type: 'FeatureCollection',
    features: rows.map((row) => ({
      type: 'Feature',
      id: row.id,
      properties: { zone: row.number, name: row.name, colour: row.colour, areaM2: row.areaM2, vines: row.vineCount, blockId: row.blockId, zoningId: row.zoningId, zones: rows.filter((other) => other.zoningId === row.zoningId).length },
      geometry: row.geometry,
    })),
  };
}
