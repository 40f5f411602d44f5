import type { z } from 'zod';
import type { Transaction } from 'objection';
import type { newScenario } from '../../../shared/contracts/lots.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Lot } from '../../models/Lot.ts';
import { LotPart } from '../../models/LotPart.ts';
import { ScaleTicket } from '../../models/ScaleTicket.ts';
import { Scenario } from '../../models/Scenario.ts';
import { say } from '../../sentences/say.ts';

/** Copies a scenario with its lots: a what-if that changes nothing live. */
export async function copyScenario(access: Access, input: z.infer<typeof newScenario>): Promise<{ id: string }> {
  return Scenario.transaction(async (trx) => {
    const from = await Scenario.query(trx).findOne({ estateId: access.estateId, id: input.copyOf }).throwIfNotFound();
    const copy = await Scenario.query(trx).insert({ estateId: access.estateId, seasonId: from.seasonId, name: input.name, isLive: false, createdBy: access.personId });
    await copyLots(trx, access, { lots: await Lot.query(trx).where({ estateId: access.estateId, scenarioId: from.id }), to: copy });
    await writeAudit(trx, access, { action: 'lots.copyScenario', subjectType: 'scenario', subjectId: copy.id, subjectName: input.name, after: { copyOf: from.id } });
    return { id: copy.id };
  });
}

/** Copies lots with their vines into a scenario, as drafts. */
export async function copyLots(trx: Transaction, access: Access, { lots, to }: { lots: readonly Lot[]; to: Scenario }): Promise<void> {
  for (const lot of lots) {
    const made = await Lot.query(trx).insert({
      estateId: access.estateId,
      scenarioId: to.id,
      seasonId: lot.seasonId,
      name: lot.name,
      wineType: lot.wineType,
      pickOn: lot.pickOn,
      tankId: lot.tankId,
      crew: lot.crew,
      alcoholMethod: lot.alcoholMethod,
      createdBy: access.personId,
      createdAt: lot.createdAt,
    });
    for (const part of await LotPart.query(trx).where({ estateId: access.estateId, lotId: lot.id })) {
      const { id: partId, ...facts } = part.toJSON() as LotPart;
      const copied = await LotPart.query(trx).insert({ ...facts, lotId: made.id });
      await trx.raw('insert into lot_row_runs (estate_id, scenario_id, lot_part_id, row_id, vines) select estate_id, ?, ?, row_id, vines from lot_row_runs where estate_id = ? and lot_part_id = ?', [to.id, copied.id, access.estateId, partId]);
    }
  }
}

/**
 * Takes a what-if over: the drafts in force give way to its lots. Confirmed and picked lots stand, as do those that tickets name; a lot of the what-if
 * with the name of one of them is taken for it and left out.
 */
export async function applyScenario(access: Access, scenarioId: string): Promise<{ id: string }> {
  return Scenario.transaction(async (trx) => {
    const from = await Scenario.query(trx).findOne({ estateId: access.estateId, id: scenarioId }).throwIfNotFound();
    if (from.isLive) throw new Unusable('isLive', say('scenarioIsLive'));
    const live = await Scenario.query(trx).findOne({ estateId: access.estateId, seasonId: from.seasonId, isLive: true }).forUpdate().throwIfNotFound();
    const standing = await Lot.query(trx).where({ estateId: access.estateId, scenarioId: live.id });
    const weighed = await ScaleTicket.query(trx).where({ estateId: access.estateId }).whereIn('lotId', standing.map(({ id }) => id)).distinct('lotId');
    // Tickets are kept whatever became of their load, and so is the lot they name.
    const firm = standing.filter(({ id, state }) => state !== 'draft' || weighed.some(({ lotId }) => lotId === id));
    await Lot.query(trx).where({ estateId: access.estateId, scenarioId: live.id }).whereNotIn('id', firm.map(({ id }) => id)).delete();
    const lots = (await Lot.query(trx).where({ estateId: access.estateId, scenarioId: from.id })).filter((lot) => !firm.some(({ name }) => name === lot.name));
    const shared = await vinesShared(trx, access, { lots, firm });
    if (shared) throw new Clash('vineTwice', say('vinesInLiveLot', { inLive: shared.inLive, inWhatIf: shared.inWhatIf }));
    await copyLots(trx, access, { lots, to: live });
    await writeAudit(trx, access, { action: 'lots.applyScenario', subjectType: 'scenario', subjectId: from.id, subjectName: from.name, before: { lots: standing.map(({ name }) => name) }, after: { lots: lots.map(({ name }) => name) } });
    return { id: live.id };
  });
}

async function vinesShared(trx: Transaction, access: Access, { lots, firm }: { lots: readonly Lot[]; firm: readonly Lot[] }): Promise<{ inLive: string; inWhatIf: string } | null> {
  if (lots.length === 0 || firm.length === 0) return null;
  const found = await LotPart.query(trx)
    .where('lot_parts.estateId', access.estateId)
    .whereIn('lot_parts.lotId', lots.map(({ id }) => id))
    .join('lot_row_runs as mine', 'mine.lotPartId', 'lot_parts.id')
    .join('lot_row_runs as theirs', 'theirs.rowId', 'mine.rowId')
    .whereRaw('theirs.vines && mine.vines')
    .join('lot_parts as other', 'other.id', 'theirs.lotPartId')
    .whereIn('other.lotId', firm.map(({ id }) => id))
    .select('lot_parts.lotId as mineId', 'other.lotId as theirsId')
    .first();
  if (!found) return null;
  const { mineId, theirsId } = found as unknown as { mineId: string; theirsId: string };
  return { inLive: firm.find(({ id }) => id === theirsId)!.name, inWhatIf: lots.find(({ id }) => id === mineId)!.name };
}

/** Takes a what-if off the list; the lots in force cannot be taken away so. */
export async function deleteScenario(access: Access, scenarioId: string): Promise<void> {
  await Scenario.transaction(async (trx) => {
    const scenario = await Scenario.query(trx).findOne({ estateId: access.estateId, id: scenarioId }).throwIfNotFound();
    if (scenario.isLive) throw new Unusable('isLive', say('liveNotDeleted'));
    await scenario.$query(trx).delete();
    await writeAudit(trx, access, { action: 'lots.deleteScenario', subjectType: 'scenario', subjectId: scenarioId, subjectName: scenario.name });
  });
}
