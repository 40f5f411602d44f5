import type { MultiPolygon } from 'geojson';
import type { TransactionOrKnex } from 'objection';
import type { LonLat, MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { Block } from '../../models/Block.ts';
import { BlockRow } from '../../models/BlockRow.ts';
import { asGeoJson } from '../../models/geometry.ts';
import type { TargetBlock } from '../../placing/placed.ts';

export interface Covered {
  blockId: string;
  name: string;
  /** Share of the block's area under the file's outline. */
  share: number;
}

/** Where the estate is: its marker, else the middle of its blocks, else not known. */
export async function estatePlace(estateId: string): Promise<LonLat | null> {
  const answer = (await Block.knex().raw(
    `select ST_X(p) as lon, ST_Y(p) as lat from (
       select coalesce((select marker from estates where id = :estateId), (select ST_Centroid(ST_Collect(boundary)) from blocks where estate_id = :estateId and retired_at is null)) as p) as place`,
    { estateId },
  )) as { rows: { lon: number | null; lat: number | null }[] };
  const { lon, lat } = answer.rows[0]!;
  return lon === null || lat === null ? null : [lon, lat];
}

/** Whether the estate has any block that is in use. */
export async function hasBlocks(estateId: string): Promise<boolean> {
  return (await Block.query().where({ estateId }).whereNull('retiredAt').select('id').first()) !== undefined;
}

/** Blocks that an outline touches, and how far the nearest block is from it; null kilometres when there are no blocks. */
export async function blocksUnder(estateId: string, outline: readonly (readonly [number, number])[]): Promise<{ covers: Covered[]; nearestKm: number | null }> {
  const ring = JSON.stringify({ type: 'Polygon', coordinates: [outline] });
  const answer = (await Block.knex().raw(
    `with f as (select ST_MakeValid(ST_SetSRID(ST_GeomFromGeoJSON(?), 4326)) as shape)
     select b.id as "blockId", b.name,
       -- Points on one line have no area, and lie on the block all the same.
       greatest(ST_Area(ST_Intersection(b.boundary, f.shape)) / ST_Area(b.boundary), case when ST_Dimension(f.shape) < 2 and ST_Intersects(b.boundary, f.shape) then 1e-6 else 0 end) as share,
       ST_Distance(b.boundary::geography, f.shape::geography) / 1000 as km
     from blocks b, f where b.estate_id = ? and b.retired_at is null order by b.name`,
    [ring, estateId],
  )) as { rows: (Covered & { km: number })[] };
  return {
    covers: answer.rows.filter((row) => row.share > 0).map(({ blockId, name, share }) => ({ blockId, name, share: Math.min(1, share) })),
    nearestKm: answer.rows.length === 0 ? null : Math.min(...answer.rows.map((row) => row.km)),
  };
}

/** Blocks as a layer is placed on them: all of the estate, or one; with their rows where these are asked for. */
export async function targetBlocks(estateId: string, options: { blockId?: string; withRows?: boolean; trx?: TransactionOrKnex } = {}): Promise<TargetBlock[]> {
  const query = Block.query(options.trx).where({ estateId }).whereNull('retiredAt').orderBy('name').select('id', 'cellSizeM', 'rowSpacingM', 'rowBearingDeg', asGeoJson('boundary').as('boundary'));
  if (options.blockId !== undefined) query.where({ id: options.blockId });
  const blocks = await query;
  const rows = options.withRows ? await BlockRow.query(options.trx).where({ estateId }).whereNull('retiredAt').whereIn('blockId', blocks.map(({ id }) => id)).orderBy('ordinal').select('blockId', 'pieces') : [];
  return blocks.map(({ id, cellSizeM, rowSpacingM, rowBearingDeg, boundary }) => ({
    id, cellSizeM, rowSpacingM, rowBearingDeg,
    boundary: (boundary as MultiPolygon).coordinates as unknown as MultiPolygonLonLat,
    rows: rows.filter(({ blockId }) => blockId === id).flatMap(({ pieces }) => pieces.map((piece): LonLat[] => [piece.from, ...piece.bends, piece.to])),
  }));
}
