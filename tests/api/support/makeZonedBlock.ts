import { encodeCells } from '../../../shared/analysis/cellBytes.ts';
import { newBlock, type NewBlockInput } from '../../../shared/contracts/blocks.ts';
import { cellCentre } from '../../../shared/analysis/grid.ts';
import { toUtm } from '../../../shared/geo/utm.ts';
import { gridOf, loadBlockVines, zonesOfVines, type BlockVines } from '../../../server/ground/blockVines.ts';
import { fromGeoJson } from '../../../server/models/geometry.ts';
import { Season } from '../../../server/models/Season.ts';
import { Zone } from '../../../server/models/Zone.ts';
import { Zoning } from '../../../server/models/Zoning.ts';
import { createBlock } from '../../../server/services/blocks/change.ts';

export interface ZonedBlock {
  blockId: string;
  zoningId: string;
  /** Zone ids by number, from 1. */
  zoneIds: string[];
  ground: BlockVines;
  zoneOf: Uint8Array;
}

/** A block of about 1.9 ha with a live zoning: the western half is zone 1, the eastern half zone 2. */
export async function makeZonedBlock(owner: { estateId: string; personId: string }, over: Partial<NewBlockInput> & { west?: number } = {}): Promise<ZonedBlock> {
  const { west = 2.4, ...facts } = over;
  const middle = west + 0.0009;
  const east = west + 0.0018;
  const rectangle = (from: number, to: number) => ({ type: 'Polygon' as const, coordinates: [[[from, 43.1], [to, 43.1], [to, 43.1012], [from, 43.1012], [from, 43.1]]] });
  const access = { ...owner, roles: ['owner' as const] };
  const input = newBlock.parse({ name: 'Plot', boundary: rectangle(west, east), rowSpacingM: 2.5, vineSpacingM: 1.2, ...facts });
  const block = await createBlock(access, input, new Date('2026-06-01'));
  const ground = await loadBlockVines(owner.estateId, block.id);
  const grid = gridOf(ground);
  const [border] = toUtm([middle, 43.1006], ground.block.epsg);
  const labels = Uint8Array.from(grid.inside, (inside, cell) => (inside ? (cellCentre(grid, cell)[0] < border ? 1 : 2) : 0));
  const season = await Season.query().where({ estateId: owner.estateId }).orderBy('startsOn', 'desc').first().throwIfNotFound();
  const zoning = await Zoning.query().insert({ estateId: owner.estateId, blockId: block.id, seasonId: season.id, number: 1, state: 'live', options: {}, seed: 1, engineVersion: 'test', gridKey: grid.key, labels: Buffer.from(encodeCells(labels)), chosenZones: 2 });
  const zoneOf = zonesOfVines(ground, zoning);
  const zones = await Zone.query().insert(
    [1, 2].map((number) => ({ estateId: owner.estateId, zoningId: zoning.id, number, name: `Zone ${number}`, geometry: fromGeoJson(number === 1 ? rectangle(west, middle) : rectangle(middle, east)) as never, areaM2: block.areaHa * 5000, vineCount: zoneOf.filter((zone) => zone === number).length })),
  );
  return { blockId: block.id, zoningId: zoning.id, zoneIds: zones.map((zone) => zone.id), ground, zoneOf };
}
