import type { MultiPolygon } from 'geojson';
import { randomUUID } from 'node:crypto';
import type { Transaction } from 'objection';
import { defineGrid } from '../../../shared/analysis/grid.ts';
import type { BlockChange, ChangedBlock, NewBlock, OutlineCheck, RowEffects } from '../../../shared/contracts/blocks.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import type { OutlineGeometry } from '../../../shared/geo/outline.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Stale } from '../../errors.ts';
import { enqueueJob } from '../../jobs/queue.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import { fromGeoJson } from '../../models/geometry.ts';
import { Layer } from '../../models/Layer.ts';
import { checkOutline } from './outlines.ts';
import { rebuildRows } from './rebuildRows.ts';
import { hasSurveyedRows, requireNothingAtStake } from './rowsAtStake.ts';
import { findBlock, viewBlock } from './view.ts';
import { say } from '../../sentences/say.ts';

/** What an outline would come to: area, overlaps, distance. Saves nothing. */
export async function previewOutline(access: Access, asked: { boundary: OutlineGeometry; blockId: string | null; bookAreaHa: number | null }): Promise<OutlineCheck> {
  const { areaM2, epsg, geometry, warnings } = await checkOutline(undefined, access, asked.boundary, asked);
  return { areaHa: areaM2 / 10_000, epsg, boundary: geometry as OutlineCheck['boundary'], warnings };
}

/** Makes a block with its rows. Layers of the estate that cover it are placed on it in the background. */
export async function createBlock(access: Access, input: NewBlock, now: Date): Promise<ChangedBlock> {
  const id = randomUUID();
  const made = await Block.transaction((trx) => insertBlock(trx, access, { id, input, now }));
  return { ...(await viewBlock(access, id, { now, noticed: made.warnings })), rowEffects: made.effects, jobId: made.jobId };
}

/** The same inside a transaction of somebody else: several outlines of one file become blocks together. */
export async function insertBlock(trx: Transaction, access: Access, { id, input, now }: { id: string; input: NewBlock; now: Date }) {
  const { boundary, gate, ...facts } = input;
  await requireFreeName(trx, access, id, input.name);
  const outline = await checkOutline(trx, access, boundary as OutlineGeometry, { blockId: id, bookAreaHa: input.bookAreaHa });
  const gridKey = defineGrid(outline.polygons, input.cellSizeM).key;
  await Block.query(trx).insert({
    id,
    estateId: access.estateId,
    ...facts,
    boundary: fromGeoJson(outline.geometry) as never,
    gate: gate === null ? null : (fromGeoJson(gate as never) as never),
    areaM2: outline.areaM2,
    epsg: outline.epsg,
    gridKey,
  });
  const rows = await rebuildRows(trx, { ...input, id, estateId: access.estateId, boundary: outline.polygons, epsg: outline.epsg }, now);
  await writeAudit(trx, access, { action: 'block.create', subjectType: 'block', subjectId: id, subjectName: input.name, after: { ...facts, areaHa: outline.areaM2 / 10_000 } });
  return { warnings: [...outline.warnings, ...rows.warnings], effects: rows.effects, jobId: await placeLayersOn(trx, access, id) };
}

const rowFacts = ['rowBearingDeg', 'rowSpacingM', 'vineSpacingM', 'rowCount', 'headlandM', 'rowOneSide', 'firstRowLabel'] as const;

/** Changes facts or outline of a block that is still at the version the change was made on. Asks first where building its rows anew would lose something. */
export async function changeBlock(access: Access, blockId: string, change: BlockChange, made: { version: number; now: Date }): Promise<ChangedBlock> {
  const { now } = made;
  const done = await Block.transaction(async (trx) => {
    const before = await lockBlock(trx, access, blockId, made);
    const { boundary, gate, rowsMayGo = false, ...facts } = change;
    if (change.name !== undefined) await requireFreeName(trx, access, blockId, change.name);
    const after = { ...before, ...facts } as Block;
    const polygons = before.boundary.coordinates as unknown as MultiPolygonLonLat;
    const outline = boundary ? await checkOutline(trx, access, boundary as OutlineGeometry, { blockId, bookAreaHa: after.bookAreaHa }) : null;
    const area = outline ?? { polygons, epsg: before.epsg, areaM2: before.areaM2, warnings: [] };
    const gridKey = outline || after.cellSizeM !== before.cellSizeM ? defineGrid(area.polygons, after.cellSizeM).key : before.gridKey;
    await Block.query(trx)
      .where({ estateId: access.estateId, id: blockId })
      .patch({
        ...facts,
        ...(outline ? { boundary: fromGeoJson(outline.geometry) as never, areaM2: outline.areaM2, epsg: outline.epsg } : {}),
        ...(gate === undefined ? {} : { gate: gate === null ? null : (fromGeoJson(gate as never) as never) }),
        gridKey,
        version: before.version + 1,
      });
    const newRows = outline !== null || rowFacts.some((fact) => after[fact] !== before[fact]);
    const surveyed = newRows && !rowsMayGo && (await hasSurveyedRows(trx, before));
    const rows = newRows ? await rebuildRows(trx, { ...after, id: blockId, boundary: area.polygons, epsg: area.epsg }, now) : null;
    if (rows !== null && !rowsMayGo) await requireNothingAtStake(trx, before, { surveyed, effects: rows.effects, now });
    await writeAudit(trx, access, { action: 'block.change', subjectType: 'block', subjectId: blockId, subjectName: after.name, ...difference(before, change, area.areaM2) });
    const jobId = gridKey === before.gridKey ? null : await placeLayersOn(trx, access, blockId);
    return { rows: rows?.effects ?? (null as RowEffects | null), jobId, warnings: [...area.warnings, ...(rows?.warnings ?? [])] };
  });
  return { ...(await viewBlock(access, blockId, { now, ...(done.warnings.length > 0 ? { noticed: done.warnings } : {}) })), rowEffects: done.rows, jobId: done.jobId };
}

/** Takes a block out of use; what was measured on it stays. Refused while a round or a lot of this season needs it. */
export async function retireBlock(access: Access, blockId: string, made: { version: number; now: Date }): Promise<void> {
  await Block.transaction(async (trx) => {
    const block = await lockBlock(trx, access, blockId, made);
    const used = (await trx.raw(
      `select (select count(*) from rounds where estate_id = :estateId and block_id = :blockId and state in ('sent', 'open')) as rounds,
              (select count(*) from lot_parts p join lots l on l.id = p.lot_id join scenarios s on s.id = l.scenario_id and s.is_live
               where p.estate_id = :estateId and p.block_id = :blockId and l.state <> 'picked') as lots`,
      { estateId: access.estateId, blockId },
    )) as { rows: { rounds: number; lots: number }[] };
    const { rounds, lots } = used.rows[0]!;
    if (rounds > 0) throw new Clash('blockInUse', say('blockWalked', { block: block.name, n: rounds }));
    if (lots > 0) throw new Clash('blockInUse', say('blockInLots', { block: block.name, n: lots }));
    await Block.query(trx).where({ estateId: access.estateId, id: blockId }).patch({ retiredAt: made.now, version: block.version + 1 });
    await writeAudit(trx, access, { action: 'block.retire', subjectType: 'block', subjectId: blockId, subjectName: block.name });
  });
}

/** The block, locked against others who change it, if it is still at this version. */
export async function lockBlock(trx: Transaction, access: Access, blockId: string, made: { version: number; now: Date }): Promise<Block> {
  await Block.query(trx).findOne({ estateId: access.estateId, id: blockId }).whereNull('retiredAt').forUpdate().select('id').throwIfNotFound();
  const block = await findBlock(access, blockId, trx);
  if (block.version !== made.version) {
    throw new Stale('blockChanged', say('blockChanged', { block: block.name, version: block.version, yours: made.version }), {
      current: await viewBlock(access, blockId, { now: made.now, trx }),
    });
  }
  return block;
}

async function requireFreeName(trx: Transaction, access: Access, blockId: string, name: string): Promise<void> {
  const taken = await Block.query(trx).where({ estateId: access.estateId }).whereNull('retiredAt').whereNot({ id: blockId }).whereRaw('lower(name) = lower(?)', [name]).resultSize();
  if (taken > 0) throw new Clash('nameTaken', say('nameTaken', { name }));
}

/** Layers are cells on a block's own grid: a new grid needs them placed again from their files. */
async function placeLayersOn(trx: Transaction, access: Access, blockId: string): Promise<string | null> {
  const layers = await Layer.query(trx).where({ estateId: access.estateId }).whereNull('retiredAt').whereNotNull('importId').resultSize();
  return layers === 0 ? null : enqueueJob(trx, access, { kind: 'placeLayer', subjectType: 'block', subjectId: blockId });
}

function difference(before: Block, change: BlockChange, areaM2: number): { before: Record<string, unknown>; after: Record<string, unknown> } {
  const { boundary, rowsMayGo: _, ...facts } = change;
  const changed = Object.keys(facts).filter((fact) => JSON.stringify(before[fact as keyof Block]) !== JSON.stringify(facts[fact as keyof typeof facts])) as (keyof typeof facts)[];
  const pick = (from: Partial<Record<keyof typeof facts, unknown>>) => Object.fromEntries(changed.map((fact) => [fact, from[fact]]));
  return {
    before: { ...pick(before as Partial<Record<keyof typeof facts, unknown>>), ...(boundary ? { boundary: before.boundary satisfies MultiPolygon, areaHa: before.areaM2 / 10_000 } : {}) },
    after: { ...pick(facts), ...(boundary ? { areaHa: areaM2 / 10_000 } : {}) },
  };
}
