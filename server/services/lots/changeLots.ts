import type { z } from 'zod';
import { reachOf } from '../../../shared/catalog/permissions.ts';
import type { lotChange, lotParts, newLot, newTank, tankChange } from '../../../shared/contracts/lots.ts';
import type { Transaction } from 'objection';
import type { Access } from '../../access/access.ts';
import { Clash, NotAllowed, Stale, Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Lot } from '../../models/Lot.ts';
import { LotPart } from '../../models/LotPart.ts';
import { LotRowRun, vineRange } from '../../models/LotRowRun.ts';
import { ScaleTicket } from '../../models/ScaleTicket.ts';
import { Scenario } from '../../models/Scenario.ts';
import { Tank } from '../../models/Tank.ts';
import { findScenario } from './board.ts';
import { boardOfLot, keepDecision } from './decisions.ts';
import { runsOf, type Run } from './boardGround.ts';
import { requireFruitDay } from './fruitDay.ts';
import { requireNoPickStop } from './pickStops.ts';
import { commonRuns, liveZoneRuns } from './zoneRuns.ts';
import { say } from '../../sentences/say.ts';

export async function createLot(access: Access, input: z.infer<typeof newLot>, today: string): Promise<{ id: string }> {
  const scenario = await findScenario(access, { scenarioId: input.scenarioId, today });
  if (input.pickOn !== null) await requireFruitDay(undefined, scenario, input.pickOn);
  return Lot.transaction(async (trx) => {
    const lot = await Lot.query(trx).insert({ ...input, scenarioId: scenario.id, seasonId: scenario.seasonId, estateId: access.estateId, createdBy: access.personId });
    await writeAudit(trx, access, { action: 'lots.create', subjectType: 'lot', subjectId: lot.id, subjectName: input.name, after: input });
    return { id: lot.id };
  });
}

/** Changes name, wine, date, tank or way to potential alcohol of a lot that is still at the version the change was made on. */
export async function changeLot(access: Access, lotId: string, change: z.infer<typeof lotChange>, version: number): Promise<void> {
  await Lot.transaction(async (trx) => {
    const lot = await lockLot(trx, access, lotId, version);
    if (change.pickOn) await requireFruitDay(trx, lot, change.pickOn);
    if (change.pickOn) await requireNoPickStop(trx, access, { lotId, pickOn: change.pickOn });
    const { name, pickOn, tankId, crew, wineType, alcoholMethod } = lot;
    await lot.$query(trx).patch({ ...change, version: lot.version + 1 });
    await writeAudit(trx, access, { action: 'lots.change', subjectType: 'lot', subjectId: lotId, subjectName: name, before: { name, pickOn, tankId, crew, wineType, alcoholMethod }, after: change });
  });
}

/**
 * Sets the whole content of a lot: zones of any block, whole or by rows, stored as runs of vines along rows.
 * A vine that is in another lot of the scenario is refused with that lot's name; the database refuses it too.
 */
export async function setLotParts(access: Access, lotId: string, input: z.infer<typeof lotParts>, version: number): Promise<void> {
  await Lot.transaction(async (trx) => {
    const lot = await lockLot(trx, access, lotId, version);
    requireDraft(lot);
    const held = (await runsOf(access.estateId, lot.scenarioId, trx)).filter((run) => run.lotId === lotId);
    await LotPart.query(trx).where({ estateId: access.estateId, lotId }).delete();
    for (const part of input.parts) await addPart(trx, access, lot, part, held);
    await lot.$query(trx).patch({ version: lot.version + 1 });
    await writeAudit(trx, access, { action: 'lots.parts', subjectType: 'lot', subjectId: lotId, subjectName: lot.name, after: input.parts });
  });
}

/**
 * Puts a zone in force, or rows of it, into a lot; refused when a vine of it is in another. Rows that `held` has in part
 * stay as they are: zones published since may cut a row elsewhere than the lot does.
 */
export async function addPart(trx: Transaction, access: Access, lot: Lot, part: { zoneId: string; rowIds: string[] | null }, held: readonly Run[] = []): Promise<void> {
  const { zone, zoning, ground, runs: all } = await liveZoneRuns(trx, access.estateId, part.zoneId);
  const wanted = part.rowIds === null ? null : new Set(part.rowIds);
  const runs = all.flatMap((run) => {
    if (wanted === null) return [run];
    if (!wanted.has(run.rowId)) return [];
    const had = commonRuns(run, held);
    return had.length > 0 ? had : [run];
  });
  if (runs.length === 0) throw new Unusable('emptyPart', say('emptyPart', { number: zone.number, block: ground.block.name }));
  await requireFree(trx, access, lot, { runs, what: `${ground.block.name} zone ${zone.number}` });
  const row = await LotPart.query(trx).insert({ estateId: access.estateId, lotId: lot.id, blockId: zoning.blockId, zoneId: zone.id, zoneNumber: zone.number, zoneName: zone.name });
  await LotRowRun.query(trx).insert(runs.map((run) => ({ estateId: access.estateId, scenarioId: lot.scenarioId, lotPartId: row.id, rowId: run.rowId, vines: vineRange(run.from, run.to) as unknown as string })));
}

/** Zones of a confirmed lot are what its notice says; those of a picked one are history. */
export function requireDraft({ name, state }: Lot): void {
  if (state === 'confirmed') throw new Unusable('lotStands', say('lotConfirmed', { lot: name }));
  if (state === 'picked') throw new Unusable('lotStands', say('lotPicked', { lot: name }));
}

async function requireFree(trx: Transaction, access: Access, lot: Lot, part: { runs: { rowId: string; from: number; to: number }[]; what: string }): Promise<void> {
  const taken = await runsOf(access.estateId, lot.scenarioId, trx);
  const clash = taken.find((other) => other.lotId !== lot.id && part.runs.some((run) => run.rowId === other.rowId && run.from <= other.to && other.from <= run.to));
  if (!clash) return;
  const other = await Lot.query(trx).findById(clash.lotId).throwIfNotFound();
  throw new Clash('vineTwice', say('vinesInOtherLot', { part: part.what, lot: other.name }));
}

/** Confirms a lot and its date. Whoever may only propose leaves it to another, unless nobody else can. */
export async function confirmLot(access: Access, lotId: string, version: number, now: Date): Promise<void> {
  if (reachOf(access.roles, 'lots.confirm') !== 'do') throw new NotAllowed(say('lotOnlyProposed'));
  const shown = await boardOfLot(access, lotId, now);
  await Lot.transaction(async (trx) => {
    const lot = await lockLot(trx, access, lotId, version);
    if (lot.pickOn === null) throw new Unusable('noPickDate', say('noPickDate'));
    if ((await LotPart.query(trx).where({ estateId: access.estateId, lotId }).resultSize()) === 0) throw new Unusable('emptyLot', say('emptyLot'));
    await requireNoPickStop(trx, access, { lotId, pickOn: lot.pickOn });
    await lot.$query(trx).patch({ state: 'confirmed', confirmedBy: access.personId, confirmedAt: now, version: lot.version + 1 });
    await keepDecision(trx, access, { lotId, kind: 'confirm', shown, now });
    await writeAudit(trx, access, { action: 'lots.confirm', subjectType: 'lot', subjectId: lotId, subjectName: lot.name, after: { pickOn: lot.pickOn } });
  });
}

export async function deleteLot(access: Access, lotId: string, version: number): Promise<void> {
  await Lot.transaction(async (trx) => {
    const lot = await lockLot(trx, access, lotId, version);
    requireDraft(lot);
    if ((await ScaleTicket.query(trx).where({ estateId: access.estateId, lotId }).resultSize()) > 0) throw new Unusable('lotHasTickets', say('lotHasTickets', { lot: lot.name }));
    await lot.$query(trx).delete();
    await writeAudit(trx, access, { action: 'lots.delete', subjectType: 'lot', subjectId: lotId, subjectName: lot.name, before: { wineType: lot.wineType, pickOn: lot.pickOn } });
  });
}

export async function createTank(access: Access, input: z.infer<typeof newTank>): Promise<{ id: string }> {
  return Tank.transaction(async (trx) => {
    const tank = await Tank.query(trx).insert({ ...input, estateId: access.estateId });
    await writeAudit(trx, access, { action: 'tanks.create', subjectType: 'tank', subjectId: tank.id, subjectName: input.name, after: input });
    return { id: tank.id };
  });
}

export async function changeTank(access: Access, tankId: string, change: z.infer<typeof tankChange> & { retiredAt?: Date }): Promise<void> {
  await Tank.transaction(async (trx) => {
    const tank = await Tank.query(trx).findOne({ estateId: access.estateId, id: tankId }).throwIfNotFound();
    const { name, litres, workingFill, minimumFill } = tank;
    if (!change.retiredAt && (change.minimumFill ?? minimumFill) >= (change.workingFill ?? workingFill)) throw new Unusable('tankFill', say('tankFill', { tank: name }));
    await tank.$query(trx).patch(change);
    await writeAudit(trx, access, { action: change.retiredAt ? 'tanks.retire' : 'tanks.change', subjectType: 'tank', subjectId: tankId, subjectName: name, before: { name, litres, workingFill, minimumFill }, after: change });
  });
}

/** Takes a lot for a change. One change of a scenario's lots at a time: people who move the same vines at once wait for each other. */
export async function lockLot(trx: Transaction, access: Access, lotId: string, version: number): Promise<Lot> {
  const { scenarioId } = await Lot.query(trx).findOne({ estateId: access.estateId, id: lotId }).throwIfNotFound();
  await Scenario.query(trx).findById(scenarioId).forNoKeyUpdate();
  const lot = await Lot.query(trx).findOne({ estateId: access.estateId, id: lotId }).forUpdate().throwIfNotFound();
  if (lot.version !== version) throw new Stale('lotChanged', say('lotChanged', { lot: lot.name }), { current: lot.version });
  return lot;
}
