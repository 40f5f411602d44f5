import type { Point } from 'geojson';
import { permissions, reachOf, type Permission, type Reach } from '../../shared/catalog/permissions.ts';
import { isRole, type Role } from '../../shared/catalog/roles.ts';
import { estateSettings } from '../../shared/contracts/estate.ts';
import type { Session, SessionEstate } from '../../shared/contracts/session.ts';
import { dayIn } from '../../shared/season/dayIn.ts';
import { Estate } from '../models/Estate.ts';
import { asGeoJson } from '../models/geometry.ts';
import { Membership } from '../models/Membership.ts';
import { Person } from '../models/Person.ts';
import { Season } from '../models/Season.ts';

/** What the browser needs to know of the signed-in person: who, in which estates, with which reach. */
export async function describeSession(personId: string | null, options: { csrfToken: string; demo: boolean; now: Date }): Promise<Session> {
  const person = personId === null ? undefined : await Person.query().findById(personId);
  if (!person) return { person: null, estates: [], csrfToken: options.csrfToken, demo: options.demo };
  return {
    person: {
      id: person.id,
      name: person.name,
      email: person.email,
      language: person.language as NonNullable<Session['person']>['language'],
      units: person.units,
      theme: person.theme as NonNullable<Session['person']>['theme'],
    },
    estates: await estatesOf(person.id, options.now),
    csrfToken: options.csrfToken,
    demo: options.demo,
  };
}

async function estatesOf(personId: string, now: Date): Promise<SessionEstate[]> {
  const open = await Membership.query()
    .where({ personId })
    .whereNull('endedAt')
    .whereRaw('starts_on <= current_date and (ends_on is null or ends_on >= current_date)');
  const rolesByEstate = groupByEstate(open);
  const ids = [...rolesByEstate.keys()];
  const estates = await Estate.query().findByIds(ids).orderBy('name').select('estates.*', asGeoJson('marker').as('marker'));
  const seasons = await Season.query().whereIn('estateId', ids).orderBy('startsOn');
  return estates.map((estate) => {
    const roles = (rolesByEstate.get(estate.id) ?? []).map((membership) => membership.role).filter(isRole);
    return {
      id: estate.id,
      name: estate.name,
      roles,
      permissions: reachTable(roles),
      season: seasonInForce(seasons.filter((season) => season.estateId === estate.id), dayIn(estate.timeZone, now)),
      timeZone: estate.timeZone,
      settings: estateSettings.parse(estate.settings),
      marker: markerOf(estate),
      isDemo: estate.isDemo,
    };
  });
}

function markerOf(estate: Estate): [number, number] | null {
  const marker = (estate as Estate & { marker: Point | null }).marker;
  return marker ? [marker.coordinates[0]!, marker.coordinates[1]!] : null;
}

function reachTable(roles: Role[]): Partial<Record<Permission, Reach>> {
  const entries = (Object.keys(permissions) as Permission[]).map((action) => [action, reachOf(roles, action)] as const);
  return Object.fromEntries(entries.filter(([, reach]) => reach !== null)) as Partial<Record<Permission, Reach>>;
}

/** The season that holds today, else the latest that has begun, else the first to come. */
function seasonInForce(seasons: Season[], today: string): SessionEstate['season'] {
  const found =
    seasons.find((season) => season.startsOn <= today && today <= season.endsOn) ??
    seasons.filter((season) => season.startsOn <= today).at(-1) ??
    seasons[0];
  if (!found) return null;
  return { id: found.id, name: found.name, startsOn: found.startsOn, endsOn: found.endsOn, phases: found.phases, closed: found.closedAt !== null };
}

function groupByEstate(memberships: Membership[]): Map<string, Membership[]> {
  const groups = new Map<string, Membership[]>();
  for (const membership of memberships) groups.set(membership.estateId, [...(groups.get(membership.estateId) ?? []), membership]);
  return groups;
}
