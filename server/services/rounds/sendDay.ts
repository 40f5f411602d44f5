import { newRound, type NewDay } from '../../../shared/contracts/rounds.ts';
import type { Access } from '../../access/access.ts';
import { Round } from '../../models/Round.ts';
import { dayOfPlans } from '../plans/dayOfPlans.ts';
import { prepareRound, storeRound, type PreparedRound } from './makeRound.ts';

/** Sends the plans of several blocks to the same people as one day, in the quickest order or the one given: all of them or none. */
export async function sendDay(access: Access, { plans, kmPerHour, keepOrder, ...sent }: NewDay, options: { publicUrl: string }): Promise<{ items: { id: string }[] }> {
  const { blocks } = await dayOfPlans(access, { plans, kmPerHour, keepOrder });
  const prepared: PreparedRound[] = [];
  for (const [i, { planId, travelS }] of blocks.entries()) prepared.push(await prepareRound(access, planId, newRound.parse(sent), { place: i + 1, wayS: i === 0 ? null : travelS }));
  return Round.transaction(async (trx) => {
    const items: { id: string }[] = [];
    for (const round of prepared) items.push(await storeRound(trx, access, round, options));
    return { items };
  });
}
