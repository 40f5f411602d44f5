import type { RipeningView } from '../../../shared/contracts/results.ts';
import { Missing } from '../../errors.ts';
import { Reading } from '../../models/Reading.ts';
import { Season } from '../../models/Season.ts';
import { Zoning } from '../../models/Zoning.ts';
import { say } from '../../sentences/say.ts';

export interface SeasonOfBlock {
  season: Season;
  zoning: Zoning;
  /** Name of the season whose zones are shown, where the season asked for had none of its own. */
  zonesFrom: string | null;
}

/**
 * A season of a block with the zones that its readings are told apart by: those last in force in it (at a moment: by
 * then). Readings of a season without zones of its own, such as those of an earlier table, are read by the newest zones.
 */
export async function seasonOfBlock(estateId: string, blockId: string, { seasonId, until }: { seasonId: string | null; until: Date | null }): Promise<SeasonOfBlock> {
  const newest = await newestZones(estateId, blockId, { until, seasonId: null });
  if (!newest) throw new Missing(until === null ? say('noZonesInForce') : say('noZonesInForceThen'));
  const season = await Season.query().findOne({ estateId, id: seasonId ?? newest.seasonId });
  if (!season) throw new Missing(say('unknownSeason'));
  const own = season.id === newest.seasonId ? newest : await newestZones(estateId, blockId, { until, seasonId: season.id });
  if (own) return { season, zoning: own, zonesFrom: null };
  const { name } = await Season.query().findOne({ estateId, id: newest.seasonId }).throwIfNotFound();
  return { season, zoning: newest, zonesFrom: name };
}

/** Zones in force now, or the last ones that were published by a moment or in a season. */
async function newestZones(estateId: string, blockId: string, { until, seasonId }: { until: Date | null; seasonId: string | null }): Promise<Zoning | undefined> {
  const query = Zoning.query().where({ estateId, blockId }).orderByRaw('published_at desc nulls last');
  if (seasonId !== null) query.where({ seasonId });
  if (until !== null) query.where('publishedAt', '<=', until);
  else if (seasonId === null) query.where({ state: 'live' });
  else query.whereIn('state', ['live', 'retired']);
  return query.first();
}

/** Closed, or past its last day with a later one begun: until then people still work in the old one. */
export async function isSeasonOver(estateId: string, { closedAt, startsOn, endsOn }: Season, today: string): Promise<boolean> {
  if (closedAt !== null) return true;
  return endsOn < today && (await Season.query().where({ estateId }).where('startsOn', '>', startsOn).where('startsOn', '<=', today).resultSize()) > 0;
}

/** Every season of the estate, newest first, with how many readings the block has in it. */
export async function seasonsOfBlock(estateId: string, blockId: string): Promise<RipeningView['seasons']> {
  const [seasons, counts] = await Promise.all([
    Season.query().where({ estateId }).orderBy('startsOn', 'desc').select('id', 'name'),
    Reading.query().where({ estateId, blockId }).groupBy('seasonId').select('seasonId').count('id as readings') as unknown as Promise<{ seasonId: string; readings: number }[]>,
  ]);
  return seasons.map(({ id, name }) => ({ id, name, readings: Number(counts.find(({ seasonId }) => seasonId === id)?.readings ?? 0) }));
}
