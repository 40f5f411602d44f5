import type { DayRoom } from '../../../shared/cellar/pickDays.ts';
import type { CapacityView, dayCapacity } from '../../../shared/contracts/lots.ts';
import type { z } from 'zod';
import type { Access } from '../../access/access.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { DayCapacity } from '../../models/DayCapacity.ts';

const dayMs = 86_400_000;

export async function listCapacities(access: Access): Promise<CapacityView[]> {
  const rows = await DayCapacity.query().where({ estateId: access.estateId }).orderByRaw('day nulls first');
  return rows.map(({ day, pickT, pressT, note }) => ({ day, pickT, pressT, note }));
}

/** Sets what a day, or every day without a line of its own (`day` null), can pick and press; nothing given takes the line out. */
export async function setCapacity(access: Access, input: z.infer<typeof dayCapacity>): Promise<void> {
  await DayCapacity.transaction(async (trx) => {
    const query = DayCapacity.query(trx).where({ estateId: access.estateId });
    const before = await (input.day === null ? query.whereNull('day') : query.where({ day: input.day })).first();
    const isEmpty = input.pickT === null && input.pressT === null && input.note === '';
    if (before && isEmpty) await before.$query(trx).delete();
    else if (before) await before.$query(trx).patch({ pickT: input.pickT, pressT: input.pressT, note: input.note });
    else if (!isEmpty) await DayCapacity.query(trx).insert({ ...input, estateId: access.estateId });
    await writeAudit(trx, access, { action: 'lots.capacity', subjectType: 'capacity', subjectId: access.estateId, subjectName: input.day ?? '', before: before ? { pickT: before.pickT, pressT: before.pressT, note: before.note } : null, after: input });
  });
}

/** Room of each day from the first on. */
export async function roomFrom(access: Access, { firstDay, days }: { firstDay: string; days: number }): Promise<DayRoom[]> {
  const known = await listCapacities(access);
  const usual = known.find(({ day }) => day === null);
  return Array.from({ length: days }, (_, at) => {
    const day = new Date(Date.parse(`${firstDay}T00:00:00Z`) + at * dayMs).toISOString().slice(0, 10);
    const own = known.find((line) => line.day === day);
    return { day, pickT: own ? own.pickT : (usual?.pickT ?? null), pressT: own ? own.pressT : (usual?.pressT ?? null) };
  });
}
