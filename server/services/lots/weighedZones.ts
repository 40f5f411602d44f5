import type { TicketSplit } from '../../../shared/contracts/tickets.ts';
import { isBearing } from '../../ground/blockVines.ts';
import type { ScaleTicket } from '../../models/ScaleTicket.ts';
import type { BoardBlock, BoardGround } from './boardGround.ts';

/** A ticket that counts, its parts by the zones of today. */
export type WeighedLoad = Pick<ScaleTicket, 'id' | 'lotId' | 'netKg' | 'weighedAt' | 'split'>;

/** What the scale says of a zone, over all lots it was picked into. */
export interface Weighed {
  kg: number;
  /** On the scale by itself, parted by counted bins, or by rows or expectation, which know nothing of the zone's own weight. */
  by: 'scale' | 'bins' | 'shared';
  /** Bins that were counted for it. */
  bins: number;
  /** Part of the zone's bearing vines that was picked into weighed lots. */
  share: number;
}

interface Where {
  block: BoardBlock;
  /** Index of the zone in the block. */
  at: number;
}
type Load = Pick<Weighed, 'kg' | 'by' | 'bins'>;

const sure: readonly Weighed['by'][] = ['scale', 'bins', 'shared'];

/** Kilograms of a zone by the splits of tickets, else by expected tonnes within the lot; null when none of it was weighed. */
export function weighedOf(ground: BoardGround, tickets: readonly WeighedLoad[], where: Where): Weighed | null {
  const loads: Load[] = [];
  let share = 0;
  ground.lots.forEach((lot, index) => {
    const own = shareIn(where.block, where.at, index);
    const counting = tickets.filter((ticket) => ticket.lotId === lot.id);
    if (own === 0 || counting.length === 0) return;
    share += own;
    for (const ticket of counting) loads.push(...loadsOf(ground, ticket, { ...where, index }));
  });
  const kg = loads.reduce((sum, load) => sum + load.kg, 0);
  if (!(share > 0 && kg > 0)) return null;
  return { kg, share, bins: loads.reduce((sum, { bins }) => sum + bins, 0), by: sure[Math.max(...loads.map(({ by }) => sure.indexOf(by)))]! };
}

function loadsOf(ground: BoardGround, ticket: WeighedLoad, where: Where & { index: number }): Load[] {
  const { block, at, index } = where;
  const split = ticket.split as TicketSplit[];
  if (split.length === 0) return [parted(ticket.netKg, { own: expectedIn(block, at, index), whole: ground.blocks.reduce((sum, one) => sum + expectedOfBlock(one, index), 0) })];
  return split.filter(({ blockId }) => blockId === block.ground.block.id).flatMap((part): Load[] => {
    if (part.zoneNumber === block.zones[at]!.number) return [{ kg: part.kg, ...surenessOf(part) }];
    if (part.zoneNumber !== null) return [];
    const load = parted(part.kg, { own: expectedIn(block, at, index), whole: expectedOfBlock(block, index) });
    return [load.by === 'scale' ? { ...load, ...surenessOf(part) } : load];
  });
}

function surenessOf({ how, by, count }: TicketSplit): Pick<Load, 'by' | 'bins'> {
  if (how === 'measured') return { by: 'scale', bins: 0 };
  return by === 'bins' && count !== null && count > 0 ? { by: 'bins', bins: count } : { by: 'shared', bins: 0 };
}

/** A weight of several zones shared out by what was expected of each; all of it where there is one zone only. */
function parted(kg: number, { own, whole }: { own: number; whole: number }): Load {
  return { kg: whole > 0 ? (kg * own) / whole : 0, by: own < whole - 1e-9 ? 'shared' : 'scale', bins: 0 };
}

function expectedOfBlock(block: BoardBlock, lot: number): number {
  return block.zones.reduce((sum, _, at) => sum + expectedIn(block, at, lot), 0);
}

function expectedIn(block: BoardBlock, at: number, lot: number): number {
  return shareIn(block, at, lot) * block.outlooks[at]!.tonnes.value;
}

/** Part of a zone's bearing vines that is in a lot. */
export function shareIn(block: BoardBlock, at: number, lot: number): number {
  const { number } = block.zones[at]!;
  const bearing = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === number && block.lotOf[vine] === lot && isBearing(block.ground.states[vine]!)).length;
  return bearing === 0 ? 0 : bearing / block.outlooks[at]!.bearing;
}
