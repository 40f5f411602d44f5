import type { Transaction } from 'objection';
import type { z } from 'zod';
import type { zoneMove } from '../../../shared/contracts/lots.ts';
import type { Access } from '../../access/access.ts';
import { Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Lot } from '../../models/Lot.ts';
import { LotPart } from '../../models/LotPart.ts';
import { LotRowRun, vineRange } from '../../models/LotRowRun.ts';
import { say } from '../../sentences/say.ts';
import { lockLot, requireDraft } from './changeLots.ts';
import { commonRuns, liveZoneRuns, remainingRuns, type VineRun } from './zoneRuns.ts';

/**
 * Moves what one lot holds of a zone into another, in one step: it is in both at no time, and never in none. The zone is
 * that of today, whatever its vines were called when they were put into the lot.
 */
export async function moveZone(access: Access, input: z.infer<typeof zoneMove>): Promise<void> {
  const { estateId } = access;
  await Lot.transaction(async (trx) => {
    const from = await lockLot(trx, access, input.fromLotId, input.fromVersion);
    const to = await lockLot(trx, access, input.toLotId, input.toVersion);
    if (from.scenarioId !== to.scenarioId) throw new Unusable('otherScenario', say('otherScenario'));
    [from, to].forEach(requireDraft);
    if (from.id === to.id) return;
    const { zone, zoning, runs } = await liveZoneRuns(trx, estateId, input.zoneId);
    const held = await storedRuns(trx, estateId, { lotId: from.id, blockId: zoning.blockId });
    const moved: VineRun[] = [];
    for (const run of held) {
      const taken = commonRuns(run, runs);
      if (taken.length === 0) continue;
      moved.push(...taken);
      await LotRowRun.query(trx).findById(run.id).delete();
      await keepRuns(trx, { estateId, scenarioId: from.scenarioId, lotPartId: run.lotPartId }, remainingRuns(run, taken));
    }
    if (moved.length === 0) throw new Unusable('notInLot', say('notInLot', { lot: from.name }));
    await LotPart.query(trx).where({ estateId, lotId: from.id }).whereNotExists(LotRowRun.query(trx).where('lotPartId', LotPart.ref('lot_parts.id'))).delete();
    const part = await LotPart.query(trx).insert({ estateId, lotId: to.id, blockId: zoning.blockId, zoneId: zone.id, zoneNumber: zone.number, zoneName: zone.name });
    await keepRuns(trx, { estateId, scenarioId: to.scenarioId, lotPartId: part.id }, moved);
    await from.$query(trx).patch({ version: from.version + 1 });
    await to.$query(trx).patch({ version: to.version + 1 });
    await writeAudit(trx, access, { action: 'lots.moveZone', subjectType: 'lot', subjectId: to.id, subjectName: to.name, before: { lot: from.name }, after: { lot: to.name, zones: [zone.number] } });
  });
}

async function storedRuns(trx: Transaction, estateId: string, { lotId, blockId }: { lotId: string; blockId: string }): Promise<(VineRun & { id: string; lotPartId: string })[]> {
  return (await LotRowRun.query(trx)
    .where('lot_row_runs.estateId', estateId)
    .join(`${LotPart.tableName} as part`, 'part.id', 'lot_row_runs.lotPartId')
    .where({ 'part.lotId': lotId, 'part.blockId': blockId })
    .select(
      'lot_row_runs.id',
      'lot_row_runs.lotPartId',
      'lot_row_runs.rowId',
      LotRowRun.raw('lower(lot_row_runs.vines) as "from"'),
      LotRowRun.raw('upper(lot_row_runs.vines) - 1 as "to"'),
    )) as unknown as (VineRun & { id: string; lotPartId: string })[];
}

async function keepRuns(trx: Transaction, facts: { estateId: string; scenarioId: string; lotPartId: string }, runs: readonly VineRun[]): Promise<void> {
  if (runs.length > 0) await LotRowRun.query(trx).insert(runs.map(({ rowId, from, to }) => ({ ...facts, rowId, vines: vineRange(from, to) as unknown as string })));
}
