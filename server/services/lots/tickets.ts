import { kgPerUnit, type MassUnit, type NewTicket, type TicketSplit, type TicketView } from '../../../shared/contracts/tickets.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import { Lot } from '../../models/Lot.ts';
import { Person } from '../../models/Person.ts';
import { Scenario } from '../../models/Scenario.ts';
import { ScaleTicket } from '../../models/ScaleTicket.ts';

/** Kilograms by which a split may miss the net weight: rounding of bins. */
const splitToleranceKg = 1;

/**
 * Keeps a scale ticket as it was handed over. Tickets are never changed: a correction is a new one that names the one
 * it corrects, and only the newest of such a chain counts.
 */
export async function enterTicket(access: Access, input: NewTicket, now: Date): Promise<{ id: string }> {
  const { estateId } = access;
  return ScaleTicket.transaction(async (trx) => {
    const lot = await Lot.query(trx).findOne({ estateId, id: input.lotId }).forUpdate().throwIfNotFound();
    const scenario = await Scenario.query(trx).findOne({ estateId, id: lot.scenarioId }).throwIfNotFound();
    if (!scenario.isLive) throw new Unusable('whatIf', 'A ticket belongs to a lot in force, not to a what-if.');
    const known = await ScaleTicket.query(trx).where({ estateId }).select('id', 'ticketNo', 'corrects');
    const corrected = input.corrects === null ? null : known.find((ticket) => ticket.id === input.corrects);
    if (corrected === undefined) throw new Unusable('noTicket', 'The ticket to correct is not in this estate.');
    if (corrected && known.some((ticket) => ticket.corrects === corrected.id)) throw new Clash('correctedAlready', `Ticket ${corrected.ticketNo} has been corrected already. Correct its correction.`);
    if (!corrected && known.some((ticket) => ticket.ticketNo === input.ticketNo)) throw new Clash('ticketTwice', `Ticket ${input.ticketNo} is entered already. If it was wrong, correct it.`);
    const factor = kgPerUnit[input.unit];
    requireSplitAddsUp(input.split, (input.gross - input.tare) * factor);
    const blocks = await Block.query(trx).where({ estateId }).findByIds(input.split.map((part) => part.blockId)).select('id');
    if (input.split.some((part) => !blocks.some((block) => block.id === part.blockId))) throw new Unusable('noBlock', 'The split names a block that is not in this estate.');
    const ticket = await ScaleTicket.query(trx).insert({ estateId, lotId: lot.id, ticketNo: input.ticketNo, grossKg: input.gross * factor, tareKg: input.tare * factor, unitTyped: input.unit, weighedAt: new Date(input.weighedAt), split: input.split, corrects: input.corrects, note: input.note, enteredBy: access.personId, enteredAt: now } as never);
    if (lot.state !== 'picked') await lot.$query(trx).patch({ state: 'picked', version: lot.version + 1 });
    await writeAudit(trx, access, { action: corrected ? 'tickets.correct' : 'tickets.enter', subjectType: 'ticket', subjectId: ticket.id, subjectName: input.ticketNo, after: input, reason: input.note || null });
    return { id: ticket.id };
  });
}

function requireSplitAddsUp(split: readonly TicketSplit[], netKg: number): void {
  if (split.length === 0) return;
  const sum = split.reduce((total, part) => total + part.kg, 0);
  if (Math.abs(sum - netKg) > splitToleranceKg) throw new Unusable('splitSum', `The split adds up to ${sum.toFixed(0)} kg, the net weight is ${netKg.toFixed(0)} kg. A split leaves the total as it is: change a part.`);
}

/** All tickets of the estate, newest first, with what corrects what. */
export async function listTickets(access: Access): Promise<TicketView[]> {
  const { estateId } = access;
  const rows = await ScaleTicket.query().where({ estateId }).orderBy('weighedAt', 'desc');
  const [lots, blocks, people] = await Promise.all([
    Lot.query().where({ estateId }).select('id', 'name'),
    Block.query().where({ estateId }).select('id', 'name'),
    Person.query().findByIds([...new Set(rows.map((row) => row.enteredBy))]).select('id', 'name'),
  ]);
  const nameOf = (list: { id: string; name: string }[], id: string) => list.find((one) => one.id === id)?.name ?? '';
  return rows.map((row) => ({
    id: row.id, lotId: row.lotId, lotName: nameOf(lots, row.lotId), ticketNo: row.ticketNo, grossKg: row.grossKg, tareKg: row.tareKg, netKg: row.netKg, unit: row.unitTyped as MassUnit, weighedAt: row.weighedAt.toISOString(),
    split: (row.split as TicketSplit[]).map((part) => ({ ...part, blockName: nameOf(blocks, part.blockId) })),
    corrects: row.corrects, correctedBy: rows.find((other) => other.corrects === row.id)?.id ?? null, note: row.note, enteredBy: nameOf(people, row.enteredBy), enteredAt: row.enteredAt.toISOString(),
  }));
}
