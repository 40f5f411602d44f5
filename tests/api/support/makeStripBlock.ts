import { encodeCells } from '../../../shared/analysis/cellBytes.ts';
import { cellCentre, defineGrid } from '../../../shared/analysis/grid.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { newBlock } from '../../../shared/contracts/blocks.ts';
import { Block } from '../../../server/models/Block.ts';
import { BlockRow } from '../../../server/models/BlockRow.ts';
import { asGeoJson, fromGeoJson } from '../../../server/models/geometry.ts';
import { Season } from '../../../server/models/Season.ts';
import { Zone } from '../../../server/models/Zone.ts';
import { Zoning } from '../../../server/models/Zoning.ts';
import { createBlock } from '../../../server/services/blocks/change.ts';
import { place, rectangle } from './shapes.ts';

export interface StripBlock {
  blockId: string;
  zoningId: string;
  seasonId: string;
  /** From west to east. */
  rows: BlockRow[];
  zoneIds: string[];
}

/**
 * A rectangular block with live zones that are strips of equal width from west to east.
 * With the usual size its rows run north, 2.5 m apart, with a vine every 1.2 m.
 */
export async function makeStripBlock(estate: { estateId: string; ownerId: string }, options: { name?: string; x?: number; width?: number; height?: number; zones?: number; state?: 'draft' | 'live' } = {}): Promise<StripBlock> {
  const { name = 'Zoned plot', x = 0, width = 120, height = 100, zones = 3, state = 'live' } = options;
  const { estateId, ownerId } = estate;
  const made = await createBlock({ estateId, personId: ownerId, roles: ['owner'] }, newBlock.parse({ name, boundary: rectangle({ x, width, height }), rowSpacingM: 2.5, vineSpacingM: 1.2 }), new Date('2026-06-01'));
  const block = await Block.query().findById(made.id).select('blocks.*', asGeoJson('boundary', 9).as('boundary')).throwIfNotFound();
  const grid = defineGrid(block.boundary.coordinates as unknown as MultiPolygonLonLat, block.cellSizeM);
  const labels = Uint8Array.from(grid.inside, (inside, cell) => {
    const share = (cellCentre(grid, cell)[0] - place.x - x) / width;
    return inside === 1 ? 1 + Math.max(0, Math.min(zones - 1, Math.floor(share * zones))) : 0;
  });
  const season = await Season.query().where({ estateId }).orderBy('startsOn', 'desc').first().throwIfNotFound();
  const zoning = await Zoning.query().insert({
    estateId, blockId: block.id, seasonId: season.id, number: 1, state, options: {}, seed: 1, engineVersion: 'test', gridKey: grid.key,
    labels: Buffer.from(encodeCells(labels)), chosenZones: zones, createdBy: ownerId,
  });
  const rows = await BlockRow.query().where({ blockId: block.id });
  rows.sort((a, b) => a.pieces[0]!.from[0] - b.pieces[0]!.from[0]);
  const zoneRows = await Zone.query().insert(
    Array.from({ length: zones }, (_, i) => ({
      estateId, zoningId: zoning.id, number: i + 1, name: `Strip ${i + 1}`,
      geometry: fromGeoJson(rectangle({ x: x + (i * width) / zones, width: width / zones, height })) as never, areaM2: (width * height) / zones,
    })),
  );
  return { blockId: block.id, zoningId: zoning.id, seasonId: season.id, rows, zoneIds: zoneRows.map(({ id }) => id) };
}
