import { Unusable } from '../../errors.ts';
import { Season } from '../../models/Season.ts';
import { say } from '../../sentences/say.ts';

/** The season to which zones made on a day belong. */
export async function seasonOn(estateId: string, day: string): Promise<Season> {
  const season = await Season.query().where({ estateId }).where('startsOn', '<=', day).orderBy('startsOn', 'desc').first();
  if (!season) throw new Unusable('noSeason', say('noSeasonToZone'));
  return season;
}
