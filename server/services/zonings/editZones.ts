import type { Transaction } from 'objection';
import { decodeLabels, encodeCells } from '../../../shared/analysis/cellBytes.ts';
import { applyEdit, replayEdits, zoneMapOf, type ZoneEdit, type ZoneMap } from '../../../shared/analysis/edits.ts';
import type { ZoneEditLine, ZoneOperation } from '../../../shared/contracts/zonings.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Stale, Unusable } from '../../errors.ts';
import { gridOf, loadBlockVines, type BlockVines } from '../../ground/blockVines.ts';
import { AuditEntry, writeAudit } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import { Person } from '../../models/Person.ts';
import { Zoning } from '../../models/Zoning.ts';
import { ZoneEditRecord } from '../../models/ZoneEditRecord.ts';
import { ZoningCandidate } from '../../models/ZoningCandidate.ts';
import { editFromOperation } from './editFromOperation.ts';
import { seasonOn } from './seasonOn.ts';
import { drawZones, storeZones } from './storeZones.ts';
import { say } from '../../sentences/say.ts';

/** Keeps the candidate with so many zones as a draft that can be edited. Keeping another number later starts the draft anew; with a `revision` only where nobody changed it since. */
export async function keepAsDraft(access: Access, zoningId: string, zoneCount: number, revision?: number): Promise<void> {
  const zoning = await findZoning(access, zoningId);
  await requireRevision(access, zoning, revision ?? zoning.revision);
  if (zoning.state === 'running' || zoning.state === 'failed') throw new Clash('notReady', say('zoningNotReady'));
  if (zoning.state === 'live' || zoning.state === 'retired') throw new Clash('published', say('zonesPublished'));
  const candidate = await ZoningCandidate.query().findOne({ estateId: access.estateId, zoningId, zoneCount }).throwIfNotFound();
  const ground = await loadBlockVines(access.estateId, zoning.blockId);
  requireSameOutline(zoning, ground);
  const map = zoneMapOf(gridOf(ground), decodeLabels(candidate.labels));
  zoning.chosenZones = zoneCount;
  const drawn = await drawZones(zoning, ground, map);
  await Zoning.transaction(async (trx) => {
    const locked = await lockZoning(trx, access, zoningId, zoning.revision);
    await ZoneEditRecord.query(trx).where({ estateId: access.estateId, zoningId }).delete();
    await Zoning.query(trx).where({ estateId: access.estateId, id: zoningId }).patch({ state: 'draft', chosenZones: zoneCount, baseLabels: candidate.labels, baseZones: [] });
    await storeZones(trx, locked, { ground, map, drawn });
    await writeAudit(trx, access, { action: 'zones.keep', subjectType: 'zoning', subjectId: zoningId, subjectName: ground.block.name, after: { zones: zoneCount } });
  });
}

/** One act of the manager's hand. What was undone before it is let go: the list goes on from here. */
export async function editZones(access: Access, zoningId: string, input: { operation: ZoneOperation; reason: string; revision: number }): Promise<void> {
  const { zoning, ground, edits } = await openDraft(access, zoningId, input.revision);
  const before = replay(zoning, ground, edits);
  const edit = editFromOperation(ground, before, input.operation);
  const after = applyEdit(gridOf(ground), before, edit);
  const drawn = await drawZones(zoning, ground, after);
  await Zoning.transaction(async (trx) => {
    const locked = await lockZoning(trx, access, zoningId, input.revision);
    await ZoneEditRecord.query(trx).where({ estateId: access.estateId, zoningId, undone: true }).delete();
    const sequence = edits.filter((record) => !record.undone).length + 1;
    await ZoneEditRecord.query(trx).insert({ estateId: access.estateId, zoningId, sequence, operation: { edit, asked: input.operation }, reason: input.reason, authorId: access.personId });
    await storeZones(trx, locked, { ground, map: after, drawn });
    await writeAudit(trx, access, { action: 'zones.edit', subjectType: 'zoning', subjectId: zoningId, subjectName: ground.block.name, after: input.operation, reason: input.reason || null });
  });
}

/** Takes the last edit back, or brings the last one taken back again; as often as there are edits. */
export async function stepEdits(access: Access, zoningId: string, input: { step: 'undo' | 'redo'; revision: number }): Promise<void> {
  const { zoning, ground, edits } = await openDraft(access, zoningId, input.revision);
  const target = input.step === 'undo' ? edits.filter((record) => !record.undone).at(-1) : edits.find((record) => record.undone);
  if (!target) throw new Clash('nothingToStep', say(input.step === 'undo' ? 'nothingToUndo' : 'nothingToRedo'));
  target.undone = input.step === 'undo';
  const after = replay(zoning, ground, edits);
  const drawn = await drawZones(zoning, ground, after);
  await Zoning.transaction(async (trx) => {
    const locked = await lockZoning(trx, access, zoningId, input.revision);
    await ZoneEditRecord.query(trx).where({ estateId: access.estateId, zoningId, sequence: target.sequence }).patch({ undone: target.undone });
    await storeZones(trx, locked, { ground, map: after, drawn });
    await writeAudit(trx, access, { action: `zones.${input.step}`, subjectType: 'zoning', subjectId: zoningId, subjectName: ground.block.name, after: { sequence: target.sequence } });
  });
}

export async function listEdits(access: Access, zoningId: string): Promise<ZoneEditLine[]> {
  await findZoning(access, zoningId);
  const rows = await ZoneEditRecord.query().where({ estateId: access.estateId, zoningId }).orderBy('sequence');
  const people = await Person.query().findByIds([...new Set(rows.flatMap((row) => (row.authorId ? [row.authorId] : [])))]).select('id', 'name');
  return rows.map((row) => ({ sequence: row.sequence, operation: (row.operation as StoredEdit).asked, reason: row.reason, undone: row.undone, author: people.find((person) => person.id === row.authorId)?.name ?? null, at: row.at.toISOString() }));
}

/** Takes a zoning up again as a new draft of the season that it is, with its names and colours and no edit to take back; the old one stays as it is. */
export async function restoreAsDraft(access: Access, zoningId: string, today: string): Promise<{ id: string }> {
  const old = await findZoning(access, zoningId);
  if (old.labels === null || old.baseLabels === null) throw new Unusable('noZones', say('noZonesToTakeUp'));
  const ground = await loadBlockVines(access.estateId, old.blockId);
  requireSameOutline(old, ground);
  const map = await mapOf(old, ground);
  const drawn = await drawZones(old, ground, map);
  // Zones of an earlier season would be put in force beside those of this one.
  const season = await seasonOn(access.estateId, today);
  return Zoning.transaction(async (trx) => {
    await Block.query(trx).findOne({ estateId: access.estateId, id: old.blockId }).forUpdate();
    const [last] = (await Zoning.query(trx).where({ estateId: access.estateId, blockId: old.blockId }).max('number as number')) as unknown as { number: number }[];
    const { blockId, options, seed, engineVersion, gridKey, verdict, evidence, advisedZones, chosenZones } = old;
    const copy = await Zoning.query(trx).insertAndFetch({ estateId: access.estateId, blockId, seasonId: season.id, options, seed, engineVersion, gridKey, verdict, evidence, advisedZones, chosenZones, name: old.name, number: last!.number + 1, state: 'draft', baseLabels: Buffer.from(encodeCells(map.labels)), baseZones: [...map.zones], createdBy: access.personId });
    const candidates = await ZoningCandidate.query(trx).where({ estateId: access.estateId, zoningId: old.id });
    if (candidates.length > 0) await ZoningCandidate.query(trx).insert(candidates.map(({ zoneCount, labels, doubt, memberships, zones }) => ({ estateId: access.estateId, zoningId: copy.id, zoneCount, labels, doubt, memberships, zones })));
    await storeZones(trx, copy, { ground, map, drawn });
    await writeAudit(trx, access, { action: 'zones.restore', subjectType: 'zoning', subjectId: copy.id, subjectName: ground.block.name, after: { from: old.number } });
    return { id: copy.id };
  });
}

interface StoredEdit {
  edit: ZoneEdit;
  asked: ZoneOperation;
}

async function mapOf(zoning: Zoning, ground: BlockVines): Promise<ZoneMap> {
  return replay(zoning, ground, await ZoneEditRecord.query().where({ estateId: zoning.estateId, zoningId: zoning.id }).orderBy('sequence'));
}

function replay(zoning: Zoning, ground: BlockVines, edits: readonly ZoneEditRecord[]): ZoneMap {
  const grid = gridOf(ground);
  return replayEdits(grid, zoneMapOf(grid, decodeLabels(zoning.baseLabels!), zoning.baseZones), edits.filter((record) => !record.undone).map((record) => (record.operation as StoredEdit).edit));
}

async function findZoning(access: Access, zoningId: string): Promise<Zoning> {
  return Zoning.query().findOne({ estateId: access.estateId, id: zoningId }).throwIfNotFound();
}

async function openDraft(access: Access, zoningId: string, revision: number): Promise<{ zoning: Zoning; ground: BlockVines; edits: ZoneEditRecord[] }> {
  const zoning = await findZoning(access, zoningId);
  // A draft that somebody published meanwhile was changed by them first of all.
  await requireRevision(access, zoning, revision);
  requireDraft(zoning);
  const ground = await loadBlockVines(access.estateId, zoning.blockId);
  requireSameOutline(zoning, ground);
  return { zoning, ground, edits: await ZoneEditRecord.query().where({ estateId: access.estateId, zoningId }).orderBy('sequence') };
}

/** Labels are of one grid; on another outline they would lie wrong. */
export function requireSameOutline(zoning: Zoning, ground: BlockVines): void {
  if (gridOf(ground).key !== zoning.gridKey) throw new Clash('outlineChanged', say('outlineChangedSinceZones', { block: ground.block.name }));
}

function requireDraft(zoning: Zoning): void {
  if (zoning.state !== 'draft') throw new Clash('notDraft', say('onlyDraftEdited'));
}

async function requireRevision(access: Access, zoning: Zoning, revision: number): Promise<void> {
  if (zoning.revision === revision) return;
  const last = await lastChange(access, zoning.id);
  const who = last?.personId ? (await Person.query().findById(last.personId))?.name : undefined;
  throw new Stale('zonesChanged', who === undefined ? say('zonesChangedBySomebody') : say('zonesChanged', { who }), { revision: zoning.revision, who });
}

/** The last act on a zoning that changed its zones. */
export async function lastChange(access: Access, zoningId: string): Promise<AuditEntry | undefined> {
  return AuditEntry.query().where({ estateId: access.estateId, subjectType: 'zoning', subjectId: zoningId }).whereLike('action', 'zones.%').whereNotIn('action', ['zones.export', 'zones.print']).orderBy('id', 'desc').first();
}

export async function lockZoning(trx: Transaction, access: Access, zoningId: string, revision: number): Promise<Zoning> {
  const locked = await Zoning.query(trx).findOne({ estateId: access.estateId, id: zoningId }).forUpdate().throwIfNotFound();
  await requireRevision(access, locked, revision);
  return locked;
}
