import type { MultiPolygon } from 'geojson';
import { raw, type TransactionOrKnex } from 'objection';
import type { BlockWarning } from '../../../shared/contracts/blocks.ts';
import { OutlineCrosses, readOutline, type Outline, type OutlineGeometry } from '../../../shared/geo/outline.ts';
import type { Access } from '../../access/access.ts';
import { Unusable } from '../../errors.ts';
import { Block } from '../../models/Block.ts';
import { Estate } from '../../models/Estate.ts';
import { fromGeoJson } from '../../models/geometry.ts';
import { say } from '../../sentences/say.ts';

/** Common ground below this is drawing inaccuracy along a shared edge. */
const leastOverlapM2 = 10;
/** An outline farther from the estate than this is probably in another reference system (judgement). */
const farKm = 50;
/** Drawn and written area may differ by so much before one asks which is right. */
const bookTolerance = 0.03;

export interface CheckedOutline extends Outline {
  geometry: MultiPolygon;
  warnings: BlockWarning[];
}

/** Reads an outline and compares it with the estate's other blocks. Refuses what cannot be a block, with place or value. */
export async function checkOutline(trx: TransactionOrKnex | undefined, access: Access, geometry: OutlineGeometry, facts: { blockId: string | null; bookAreaHa: number | null }): Promise<CheckedOutline> {
  const outline = readUsable(geometry);
  const shape: MultiPolygon = { type: 'MultiPolygon', coordinates: outline.polygons as unknown as MultiPolygon['coordinates'] };
  await requireValid(trx, shape);
  const warnings: BlockWarning[] = [
    ...outline.tidied.map((tidied): BlockWarning => ({ code: 'tidied', ...tidied })),
    ...(await overlaps(trx, access, shape, facts.blockId)),
    ...(await distanceWarning(trx, access, shape, facts.blockId)),
    ...bookWarning(facts.bookAreaHa, outline.areaM2),
  ];
  return { ...outline, geometry: shape, warnings };
}

/** Asked when the area in the estate's book and the drawn one are more than 3 % apart. */
export function bookWarning(bookAreaHa: number | null, areaM2: number): BlockWarning[] {
  const drawnAreaHa = areaM2 / 10_000;
  if (bookAreaHa === null || Math.abs(drawnAreaHa - bookAreaHa) <= bookTolerance * bookAreaHa) return [];
  return [{ code: 'bookDiffers', bookAreaHa, drawnAreaHa }];
}

function readUsable(geometry: OutlineGeometry): Outline {
  try {
    return readOutline(geometry);
  } catch (error) {
    if (error instanceof OutlineCrosses) throw new Unusable(error.code, error.message, { place: error.place, corners: error.corners });
    throw error;
  }
}

/** What a single ring cannot show: holes outside their outline, parts that overlap. PostGIS has the last word, as in the table. */
async function requireValid(trx: TransactionOrKnex | undefined, shape: MultiPolygon): Promise<void> {
  const answer = await (trx ?? Block.knex()).raw(
    'select valid, reason, ST_X(location) as lon, ST_Y(location) as lat from ST_IsValidDetail(ST_SetSRID(ST_GeomFromGeoJSON(?), 4326))',
    [JSON.stringify(shape)],
  );
  const { valid, reason, lon, lat } = (answer as { rows: { valid: boolean; reason: string; lon: number | null; lat: number | null }[] }).rows[0]!;
  if (valid) return;
  if (lon === null || lat === null) throw new Unusable('outlineInvalid', say('outlineInvalid', { reason: reason.toLowerCase() }));
  throw new Unusable('outlineInvalid', say('outlineInvalidNear', { reason: reason.toLowerCase(), lat: lat.toFixed(5), lon: lon.toFixed(5) }), { place: [lon, lat] });
}

async function overlaps(trx: TransactionOrKnex | undefined, access: Access, shape: MultiPolygon, blockId: string | null): Promise<BlockWarning[]> {
  const query = Block.query(trx)
    .where({ estateId: access.estateId })
    .whereNull('retiredAt')
    .where(raw('ST_Intersects(boundary, ?)', [fromGeoJson(shape)]))
    .select('id', 'name', raw('ST_Area(ST_Intersection(boundary, ?)::geography)', [fromGeoJson(shape)]).as('sharedM2'));
  if (blockId !== null) query.whereNot({ id: blockId });
  const rows = (await query) as (Block & { sharedM2: number })[];
  return rows
    .filter((row) => row.sharedM2 >= leastOverlapM2)
    .map((row) => ({ code: 'overlaps', block: row.name, blockId: row.id, areaHa: row.sharedM2 / 10_000 }));
}

async function distanceWarning(trx: TransactionOrKnex | undefined, access: Access, shape: MultiPolygon, blockId: string | null): Promise<BlockWarning[]> {
  const toShape = (column: string) => raw('ST_Distance(??::geography, ?::geography) / 1000', [column, fromGeoJson(shape)]);
  const marker = (await Estate.query(trx).findById(access.estateId).select(toShape('marker').as('km'))) as unknown as { km: number | null } | undefined;
  const others = Block.query(trx).where({ estateId: access.estateId }).whereNull('retiredAt').min(toShape('boundary')).as('km').first();
  if (blockId !== null) others.whereNot({ id: blockId });
  const nearest = (await others) as unknown as { min: number | null } | undefined;
  const distances = [marker?.km ?? null, nearest?.min ?? null].filter((km): km is number => km !== null);
  if (distances.length === 0 || Math.min(...distances) <= farKm) return [];
  return [{ code: 'farFromEstate', distanceKm: Math.min(...distances) }];
}
