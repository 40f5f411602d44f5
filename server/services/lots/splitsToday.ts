import type { TicketSplit } from '../../../shared/contracts/tickets.ts';
import { isBearing, zonesOfVines } from '../../ground/blockVines.ts';
import type { ScaleTicket } from '../../models/ScaleTicket.ts';
import { Zoning } from '../../models/Zoning.ts';
import type { BoardBlock, BoardGround } from './boardGround.ts';
import type { WeighedLoad } from './weighedZones.ts';

/**
 * Loads as they were weighed, with parts that name zones put into the zones of today. A part was named by the zones in force when its
 * ticket was entered: its kilograms stay with the vines it came from, whatever number their ground has now.
 */
export async function splitsToday(estateId: string, ground: BoardGround, tickets: readonly ScaleTicket[]): Promise<WeighedLoad[]> {
  const published = await Zoning.query().where({ estateId, seasonId: ground.season.id }).whereNotNull('publishedAt').orderBy('publishedAt').select('blockId', 'labels', 'gridKey', 'publishedAt');
  const versions = new Map(ground.blocks.map((block) => [block, published.filter(({ blockId }) => blockId === block.ground.block.id).map((zoning) => ({ since: zoning.publishedAt!, zoneOf: zonesOfVines(block.ground, zoning) }))]));
  const zonesThen = (block: BoardBlock, at: Date): Uint8Array => {
    const own = versions.get(block)!;
    return (own.filter(({ since }) => since <= at).at(-1) ?? own[0])?.zoneOf ?? block.zoneOf;
  };
  return tickets.map((ticket) => {
    const lot = ground.lots.findIndex(({ id }) => id === ticket.lotId);
    const split = (ticket.split as TicketSplit[]).flatMap((part) => {
      const block = ground.blocks.find((one) => one.ground.block.id === part.blockId);
      return block && part.zoneNumber !== null ? partToday(part, { block, lot, then: zonesThen(block, ticket.enteredAt) }) : [part];
    });
    return { ...ticket, split };
  });
}

/** Where its vines stand in several zones of today, expected tonnes share it out, and it tells nothing of how they differ. */
function partToday(part: TicketSplit, { block, lot, then }: { block: BoardBlock; lot: number; then: Uint8Array }): TicketSplit[] {
  if (then.every((zone, vine) => zone === block.zoneOf[vine])) return [part];
  const vines = [...then.keys()].filter((vine) => then[vine] === part.zoneNumber && block.lotOf[vine] === lot && isBearing(block.ground.states[vine]!));
  const found = block.zones
    .map(({ number }, at) => ({ number, tonnes: (vines.filter((vine) => block.zoneOf[vine] === number).length * block.outlooks[at]!.tonnes.value) / block.outlooks[at]!.bearing }))
    .filter(({ tonnes }) => tonnes > 0);
  if (found.length === 0) return [{ ...part, zoneNumber: null }];
  if (found.length === 1) return [{ ...part, zoneNumber: found[0]!.number }];
  const whole = found.reduce((sum, { tonnes }) => sum + tonnes, 0);
  return found.map(({ number, tonnes }) => ({ ...part, zoneNumber: number, kg: (part.kg * tonnes) / whole, how: 'shared', by: 'share', count: null }));
}
