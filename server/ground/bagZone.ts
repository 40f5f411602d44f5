import type { BagVine } from '../models/Bag.ts';
import { indexOfVine, type BlockVines } from './blockVines.ts';

/**
 * The zone that most vines of a bag are in under the zoning asked for: a bag mixes the fruit of its vines, so it stands
 * for one zone. 0 where none of its vines is in a zone; with equal shares the zone of the vine that was picked first.
 */
export function zoneOfBag(ground: BlockVines, zoneOf: Uint8Array, vines: readonly BagVine[]): number {
  const counts = new Map<number, number>();
  for (const { rowId, ordinal } of vines) {
    const vine = indexOfVine(ground, rowId, ordinal);
    const zone = vine < 0 ? 0 : zoneOf[vine]!;
    if (zone > 0) counts.set(zone, (counts.get(zone) ?? 0) + 1);
  }
  return [...counts].reduce((best, each) => (each[1] > best[1] ? each : best), [0, 0] as [number, number])[0];
}
