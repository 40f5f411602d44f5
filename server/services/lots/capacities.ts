import type { DayRoom } from '../../../shared/cellar/pickDays.ts';
import type { CapacityView, dayCapacity } from '../../../shared/contracts/lots.ts';
import type { z } from 'zod';
import type { Access } from '../../access/access.ts';
import { endOfEstateDay } from '../../ground/estateDay.ts';
import { AuditEntry, writeAudit } from '../../models/AuditEntry.ts';
import { DayCapacity } from '../../models/DayCapacity.ts';

const dayMs = 86_400_000;

const action = 'lots.capacity';

/** Room of every day that has a line, and of all others (`day` null) first; with `knownOn` as it was set by the end of that day. */
export async function listCapacities(access: Access, knownOn: string | null = null): Promise<CapacityView[]> {
  const rows = await DayCapacity.query().where({ estateId: access.estateId });
  const lines = new Map(rows.map(({ day, pickT, pressT, note }) => [day ?? '', { pickT, pressT, note }]));
  if (knownOn !== null) {
    // Newest first, so that the first change after that day is undone last.
    const later = await AuditEntry.query().where({ estateId: access.estateId, action }).where('at', '>', await endOfEstateDay(access.estateId, knownOn)).orderBy('id', 'desc');
    for (const { subjectName, before } of later) {
      if (before === null) lines.delete(subjectName);
      else lines.set(subjectName, before as Omit<CapacityView, 'day'>);
    }
  }
  return [...lines].sort(([a], [b]) => a.localeCompare(b)).map(([day, line]) => ({ day: day === '' ? null : day, ...line }));
}

/** Sets what a day, or every day without a line of its own (`day` null), can pick and press; nothing given takes the line out. */
export async function setCapacity(access: Access, input: z.infer<typeof dayCapacity>): Promise<void> {
  await DayCapacity.transaction(async (trx) => {
    const query = DayCapacity.query(trx).where({ estateId: access.estateId });
    const row = await (input.day === null ? query.whereNull('day') : query.where({ day: input.day })).first();
    const before = row ? { pickT: row.pickT, pressT: row.pressT, note: row.note } : null;
    const isEmpty = input.pickT === null && input.pressT === null && input.note === '';
    if (row && isEmpty) await row.$query(trx).delete();
    else if (row) await row.$query(trx).patch({ pickT: input.pickT, pressT: input.pressT, note: input.note });
    else if (!isEmpty) await DayCapacity.query(trx).insert({ ...input, estateId: access.estateId });
    await writeAudit(trx, access, { action, subjectType: 'capacity', subjectId: access.estateId, subjectName: input.day ?? '', before, after: input });
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
