import type { TransactionOrKnex } from 'objection';
import type { MultiPolygon } from 'geojson';
import { defineGrid, type Grid, type Labels } from '../../shared/analysis/grid.ts';
import { decodeLabels } from '../../shared/analysis/cellBytes.ts';
import { labelVines } from '../../shared/analysis/snapToRows.ts';
import type { MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import type { BlockRows } from '../../shared/geo/rows.ts';
import { rowsFromStored } from '../../shared/geo/storedRows.ts';
import { vineIndex, vineTable, type VineTable } from '../../shared/geo/vines.ts';
import { AuditEntry } from '../models/AuditEntry.ts';
import { Block } from '../models/Block.ts';
import { BlockRow } from '../models/BlockRow.ts';
import { asGeoJson } from '../models/geometry.ts';
import { Vine } from '../models/Vine.ts';
import { marksAt } from '../models/VineHistory.ts';
import type { Zoning } from '../models/Zoning.ts';
import { estateDay } from './estateDay.ts';

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
  return layOut(await findGround(estateId, blockId, trx), await Vine.query(trx).where({ estateId, blockId, proposed: false }));
}

/** A block with its rows of today and the vine census as it stood at a moment. */
export async function loadBlockVinesAt(estateId: string, blockId: string, until: Date): Promise<BlockVines> {
  const found = await findGround(estateId, blockId);
  found.block.census = await censusAt(found.block, until);
  return layOut(found, await marksAt(estateId, blockId, until));
}

async function findGround(estateId: string, blockId: string, trx?: TransactionOrKnex): Promise<{ block: Block; stored: BlockRow[] }> {
  const block = await Block.query(trx).findOne({ estateId, id: blockId }).select('blocks.*', asGeoJson('boundary', 9).as('boundary')).throwIfNotFound();
  const stored = await BlockRow.query(trx).where({ estateId, blockId }).whereNull('retiredAt').orderBy('ordinal').select('id', 'ordinal', 'label', 'labelWas', 'vineCount', 'pieces');
  return { block, stored };
}

function layOut({ block, stored }: { block: Block; stored: BlockRow[] }, known: readonly Pick<Vine, 'rowId' | 'ordinal' | 'state'>[]): BlockVines {
  const boundary = (block.boundary as MultiPolygon).coordinates as unknown as MultiPolygonLonLat;
  const rows = rowsFromStored({ boundary, rowBearingDeg: block.rowBearingDeg, epsg: block.epsg, withoutRows: block.withoutRows }, stored as never);
  const vines = vineTable(rows);
  const rowIndexOf = new Map(stored.map((row, index) => [row.id, index]));
  const states: BlockVines['states'] = new Array<null>(vines.count).fill(null);
  for (const vine of known) {
    const index = vineIndex(vines, rowIndexOf.get(vine.rowId) ?? -1, vine.ordinal);
    if (index >= 0) states[index] = vine.state;
  }
  return { block, boundary, stored, rows, vines, states, rowIndexOf };
}

/** How far the census of a block had come at a moment. */
async function censusAt(block: Block, until: Date): Promise<Block['census']> {
  if (block.censusAt === null || block.censusAt <= until) return block.census;
  const entries = await AuditEntry.query().where({ estateId: block.estateId, action: 'census.change', subjectId: block.id }).where('at', '<=', until).select('after');
  if (entries.length === 0) return 'unknown';
  return entries.some(({ after }) => (after as { complete?: boolean } | null)?.complete === true) ? 'full' : 'partial';
}

/** The day from which the census of these blocks is known change by change, where that is after `until`; else null. */
export async function censusKnownFrom(estateId: string, blocks: readonly Pick<Block, 'censusKeptSince'>[], until: Date | null): Promise<string | null> {
  const since = blocks.flatMap(({ censusKeptSince }) => censusKeptSince ?? []).sort((a, b) => b.getTime() - a.getTime())[0];
  return until === null || since === undefined || since <= until ? null : estateDay(estateId, since);
}

const knownGrids = new WeakMap<MultiPolygonLonLat, Grid>();

/** The grid of a block as it is now; laid once for a block that was loaded, however many ask. */
export function gridOf({ block, boundary }: Pick<BlockVines, 'block' | 'boundary'>): Grid {
  const known = knownGrids.get(boundary);
  if (known?.cellSizeM === block.cellSizeM) return known;
  const grid = defineGrid(boundary, block.cellSizeM);
  knownGrids.set(boundary, grid);
  return grid;
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
