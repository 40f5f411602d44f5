import type { TransactionOrKnex } from 'objection';
import { isFruitDay, lastFruitDay } from '../../../shared/season/ofSeason.ts';
import { Unusable } from '../../errors.ts';
import { Season } from '../../models/Season.ts';
import { say } from '../../sentences/say.ts';

/** Refuses a day on which no fruit of the season can be picked or weighed: most often a year that was typed wrong. */
export async function requireFruitDay(trx: TransactionOrKnex | undefined, { estateId, seasonId }: { estateId: string; seasonId: string }, day: string): Promise<void> {
  const season = await Season.query(trx).findOne({ estateId, id: seasonId }).throwIfNotFound();
  if (!isFruitDay(day, season)) throw new Unusable('notOfSeason', say('notOfSeason', { day, season: season.name, from: season.startsOn, to: lastFruitDay(season) }));
}
