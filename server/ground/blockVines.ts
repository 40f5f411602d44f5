import type { TransactionOrKnex } from 'objection';
import type { MultiPolygon } from 'geojson';
import { defineGrid, type Grid, type Labels } from '../../shared/analysis/grid.ts';
import { decodeLabels } from '../../shared/analysis/cellBytes.ts';
import { labelVines } from '../../shared/analysis/snapToRows.ts';
import type { MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import type { BlockRows } from '../../shared/geo/rows.ts';
import { rowsFromStored } from '../../shared/geo/storedRows.ts';
import { vineIndex, vineTable, type VineTable } from '../../shared/geo/vines.ts';
import { Block } from '../models/Block.ts';
import { BlockRow } from '../models/BlockRow.ts';
import { asGeoJson } from '../models/geometry.ts';
import { Vine } from '../models/Vine.ts';
import type { Zoning } from '../models/Zoning.ts';

/** All vines of a block as the calculations take them, with the stored rows they belong to. */
export interface BlockVines {
  block: Block;
  boundary: MultiPolygonLonLat;
  /** Stored rows, in order of ordinal; `rows.rows[i]` and table row index i are `stored[i]`. */
  stored: BlockRow[];
  rows: BlockRows;
  vines: VineTable;
  /** Per vine of the table: what is known of it, null for a plain living vine. */
  states: (Vine['state'] | null)[];
  rowIndexOf: Map<string, number>;
}

/** Loads a block's outline, rows and known vines in three queries and lays its vines out. */
export async function loadBlockVines(estateId: string, blockId: string, trx?: TransactionOrKnex): Promise<BlockVines> {
  const block = await Block.query(trx).findOne({ estateId, id: blockId }).select('blocks.*', asGeoJson('boundary', 9).as('boundary')).throwIfNotFound();
  const stored = await BlockRow.query(trx).where({ estateId, blockId }).whereNull('retiredAt').orderBy('ordinal').select('id', 'ordinal', 'label', 'labelWas', 'vineCount', 'pieces');
  const known = await Vine.query(trx).where({ estateId, blockId, proposed: false });
  const boundary = (block.boundary as MultiPolygon).coordinates as unknown as MultiPolygonLonLat;
  const rows = rowsFromStored({ boundary, rowBearingDeg: block.rowBearingDeg, epsg: block.epsg }, stored as never);
  const vines = vineTable(rows);
  const rowIndexOf = new Map(stored.map((row, index) => [row.id, index]));
  const states: BlockVines['states'] = new Array<null>(vines.count).fill(null);
  for (const vine of known) {
    const index = vineIndex(vines, rowIndexOf.get(vine.rowId) ?? -1, vine.ordinal);
    if (index >= 0) states[index] = vine.state;
  }
  return { block, boundary, stored, rows, vines, states, rowIndexOf };
}

/** The grid of a block as it is now. */
export function gridOf({ block, boundary }: Pick<BlockVines, 'block' | 'boundary'>): Grid {
  return defineGrid(boundary, block.cellSizeM);
}

/** Zone number of every vine of the table under a zoning; 0 where the zoning says nothing. */
export function zonesOfVines(ground: BlockVines, zoning: Pick<Zoning, 'labels' | 'gridKey'>): Uint8Array {
  const grid = gridOf(ground);
  if (zoning.labels === null) return new Uint8Array(ground.vines.count);
  if (zoning.gridKey !== grid.key) return new Uint8Array(ground.vines.count);
  return labelVines(grid, decodeLabels(zoning.labels) as Labels, ground.vines);
}

/** Index in the table of a stored vine, or -1 when its row or place is gone. */
export function indexOfVine(ground: BlockVines, rowId: string | null, ordinal: number | null): number {
  if (rowId === null || ordinal === null) return -1;
  return vineIndex(ground.vines, ground.rowIndexOf.get(rowId) ?? -1, ordinal);
}

/** A vine that bears: living and of the variety. */
export function isBearing(state: Vine['state'] | null): boolean {
  return state === null || state === 'sick';
}
