import { hashPassword } from '../access/passwords.ts';
import { Estate } from '../models/Estate.ts';
import { fromGeoJson } from '../models/geometry.ts';
import { MeasureRecord } from '../models/MeasureRecord.ts';
import { Membership } from '../models/Membership.ts';
import { Person } from '../models/Person.ts';
import { Scenario } from '../models/Scenario.ts';
import { Season } from '../models/Season.ts';
import { Tank } from '../models/Tank.ts';
import { startingMeasures } from '../services/estates.ts';
import { estateSettings } from '../../shared/contracts/estate.ts';
import type { Role } from '../../shared/catalog/roles.ts';
import { seasonOffsets, type DemoDays } from './demoDays.ts';
import type { DemoPlace } from './demoPlace.ts';
import { demoPassword, estate, people, tanks } from './marlhaven.ts';

export interface DemoEstate {
  estateId: string;
  /** Newest first: this season, last season, the one before. */
  seasons: Season[];
  personOf: (role: Role) => string;
}

/** The estate with its people, three seasons, measures and tanks. */
export async function seedEstate(days: DemoDays, place: DemoPlace): Promise<DemoEstate> {
  const passwordHash = await hashPassword(demoPassword);
  return Estate.transaction(async (trx) => {
    const marker = { type: 'Point' as const, coordinates: [...place.anchorLonLat] };
    const settings = estateSettings.parse({ meetingPoint: 'Press yard, under the walnut tree' });
    const made = await Estate.query(trx).insert({ name: estate.name, country: estate.country, timeZone: place.timeZone, languages: ['en', 'es'], isDemo: true, settings, marker: fromGeoJson(marker) as never } as never);
    const ids = new Map<Role, string>();
    for (const { email, name, role, language } of people) {
      const person = await Person.query(trx).insert({ email, name, language, passwordHash, isDemo: true }).onConflict('email').merge(['name', 'language', 'passwordHash', 'isDemo']).returning('*');
      await Membership.query(trx).insert({ estateId: made.id, personId: person.id, role, startsOn: days.day(-900) });
      if (!ids.has(role)) ids.set(role, person.id);
    }
    const seasons: Season[] = [];
    for (const yearsAgo of [0, 1, 2]) {
      const { from, to, phases } = seasonOffsets(yearsAgo);
      const named = Object.fromEntries(Object.entries(phases).map(([phase, [start, end]]) => [phase, [days.day(start), days.day(end)] as [string, string]]));
      const season = await Season.query(trx).insert({ estateId: made.id, name: seasonName(days.day(20 - yearsAgo * 365), place), startsOn: days.day(from), endsOn: days.day(to), phases: named, closedAt: yearsAgo === 0 ? null : days.at(to, 12) });
      seasons.push(season);
      await Scenario.query(trx).insert({ estateId: made.id, seasonId: season.id, name: season.name, isLive: true, createdBy: ids.get('winemaker') });
    }
    await MeasureRecord.query(trx).insert(startingMeasures(made.id));
    await Tank.query(trx).insert(tanks.map((tank) => ({ ...tank, estateId: made.id })));
    return { estateId: made.id, seasons, personOf: (role) => ids.get(role)! };
  });
}

/** "2026", or "2025/26" where a season crosses New Year, by a day of its picking. */
function seasonName(pickedOn: string, { seasonCrossesNewYear }: DemoPlace): string {
  const year = Number(pickedOn.slice(0, 4));
  return seasonCrossesNewYear ? `${year - 1}/${String(year % 100).padStart(2, '0')}` : String(year);
}
