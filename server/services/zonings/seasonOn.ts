import { Unusable } from '../../errors.ts';
import { estateDay } from '../../ground/estateDay.ts';
import { Season } from '../../models/Season.ts';
import { say } from '../../sentences/say.ts';

/** The season that it is at the estate; none before the first has begun. */
export async function seasonToday(estateId: string): Promise<Season | undefined> {
  return begunBy(estateId, await estateDay(estateId, new Date()));
}

/** The season to which zones made on a day belong. */
export async function seasonOn(estateId: string, day: string): Promise<Season> {
  const season = await begunBy(estateId, day);
  if (!season) throw new Unusable('noSeason', say('noSeasonToZone'));
  return season;
}

async function begunBy(estateId: string, day: string): Promise<Season | undefined> {
  return Season.query().where({ estateId }).where('startsOn', '<=', day).orderBy('startsOn', 'desc').first();
}
