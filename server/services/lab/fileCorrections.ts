import type { TransactionOrKnex } from 'objection';
import type { LabEntry } from '../../../shared/lab/file/labFile.ts';
import type { Bag } from '../../models/Bag.ts';
import type { Reading } from '../../models/Reading.ts';
import { newestResults } from './newestResults.ts';

/** Of each entry of a file that is a file of corrections the figure that it replaces: the earliest of its bag and measure that no other entry replaces. */
export async function correctedBy(estateId: string, { entries, bags }: { entries: readonly LabEntry[]; bags: readonly Bag[] }, trx?: TransactionOrKnex): Promise<Map<LabEntry, Reading>> {
  const standing = await newestResults(estateId, bags.map(({ id }) => id), trx);
  const taken = new Set<string>();
  const found = new Map<LabEntry, Reading>();
  for (const entry of entries) {
    const bag = bags.find(({ code }) => code === entry.code);
    const former = standing.find((reading) => reading.bagId === bag?.id && reading.measureCode === entry.measure && !taken.has(reading.id));
    if (!former) continue;
    taken.add(former.id);
    found.set(entry, former);
  }
  return found;
}

/** Figures that somebody had checked: they change only with a reason. */
export const checkedOf = (corrected: ReadonlyMap<LabEntry, Reading>): number => [...corrected.values()].filter(({ state }) => state !== 'provisional').length;
