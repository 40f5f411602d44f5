import type { Transaction } from 'objection';
import type { Access } from '../../access/access.ts';
import { Lot } from '../../models/Lot.ts';
import { ScaleTicket } from '../../models/ScaleTicket.ts';

type Facts = Pick<ScaleTicket, 'id' | 'corrects' | 'netKg'>;

/** Tickets that count: the newest of each chain of corrections, and not one that takes its load out with 0 kg. */
export function countingTickets<Ticket extends Facts>(tickets: readonly Ticket[]): Ticket[] {
  const corrected = new Set(tickets.map(({ corrects }) => corrects));
  return tickets.filter(({ id, netKg }) => netKg > 0 && !corrected.has(id));
}

/** A lot is picked while a load of it counts; one whose loads were all corrected away is again what it was before. */
export async function keepPicked(trx: Transaction, access: Access, lotIds: readonly string[]): Promise<void> {
  const { estateId } = access;
  const counting = countingTickets(await ScaleTicket.query(trx).where({ estateId }).select('id', 'lotId', 'corrects', 'netKg'));
  for (const lot of await Lot.query(trx).where({ estateId }).findByIds([...new Set(lotIds)])) {
    const state = counting.some(({ lotId }) => lotId === lot.id) ? 'picked' : lot.state !== 'picked' ? lot.state : lot.confirmedAt === null ? 'draft' : 'confirmed';
    if (state !== lot.state) await lot.$query(trx).patch({ state, version: lot.version + 1 });
  }
}
