import { may, type Permission, type Reach } from '../../shared/catalog/permissions.ts';
import type { Found } from '../../shared/contracts/search.ts';
import { matchScore } from '../../shared/search/matchScore.ts';
import type { Access } from '../access/access.ts';
import { zonesInForce } from '../ground/zonesInForce.ts';
import { Bag } from '../models/Bag.ts';
import { Block } from '../models/Block.ts';
import { BlockLayer } from '../models/BlockLayer.ts';
import { Lot } from '../models/Lot.ts';
import { Membership } from '../models/Membership.ts';
import { Round } from '../models/Round.ts';
import { RoundPerson } from '../models/RoundPerson.ts';
import { Zone } from '../models/Zone.ts';

const shown = 20;
/** An estate has some hundred names of a kind; beyond this the oldest are not looked through. */
const lookedThrough = 3000;

type Source = (access: Access) => Promise<Found[]>;

/** Where is looked, in the order of equal answers, and the right that opens each. */
const sources: readonly (readonly [Permission, Reach, Source])[] = [
  ['estate.see', 'read', blocks],
  ['estate.see', 'read', zones],
  ['lots.see', 'read', lots],
  ['people.see', 'read', people],
  ['readings.record', 'own', rounds],
  ['estate.see', 'read', layers],
  ['lab.enter', 'read', bags],
];

/** Things of the estate whose name answers what was typed, best first; accents, case and one slip are forgiven. */
export async function search(access: Access, typed: string): Promise<Found[]> {
  const open = sources.filter(([action, atLeast]) => may(access.roles, action, atLeast));
  const all = (await Promise.all(open.map(([, , source]) => source(access)))).flat();
  return all
    .map((one) => ({ one, score: Math.max(matchScore(one.name, typed), 0.8 * matchScore(`${one.name} ${one.about}`, typed)) }))
    .filter(({ score }) => score > 0)
    .sort((a, b) => b.score - a.score)
    .slice(0, shown)
    .map(({ one }) => one);
}

async function blocks({ estateId }: Access): Promise<Found[]> {
  const rows = await Block.query().where({ estateId }).whereNull('retiredAt').orderBy('name').limit(lookedThrough).select('id', 'name', 'variety');
  return rows.map(({ id, name, variety }) => ({ kind: 'block', id, name, about: variety, to: id }));
}

async function zones({ estateId }: Access): Promise<Found[]> {
  const rows = (await Zone.query()
    .alias('z')
    .joinRaw('join zonings g on g.estate_id = z.estate_id and g.id = z.zoning_id')
    .joinRaw('join blocks b on b.estate_id = g.estate_id and b.id = g.block_id and b.retired_at is null')
    .where('z.estateId', estateId)
    .whereIn('z.zoningId', zonesInForce(estateId).select('zonings.id'))
    .orderBy(['b.name', 'z.number'])
    .limit(lookedThrough)
    .select('z.id', 'z.name', 'b.name as blockName', 'b.id as blockId')) as (Zone & { blockName: string; blockId: string })[];
  return rows.map(({ id, name, blockName, blockId }) => ({ kind: 'zone', id, name, about: blockName, to: blockId }));
}

async function lots({ estateId }: Access): Promise<Found[]> {
  const rows = await Lot.query()
    .alias('l')
    .joinRaw('join scenarios s on s.estate_id = l.estate_id and s.id = l.scenario_id and s.is_live')
    .where('l.estateId', estateId)
    .orderBy('l.createdAt', 'desc')
    .limit(lookedThrough)
    .select('l.id', 'l.name', 'l.pickOn');
  return rows.map(({ id, name, pickOn }) => ({ kind: 'lot', id, name, about: pickOn ?? '', to: id }));
}

async function people({ estateId }: Access): Promise<Found[]> {
  const rows = (await Membership.query()
    .alias('m')
    .join('people as p', 'p.id', 'm.personId')
    .where('m.estateId', estateId)
    .distinct('p.id', 'p.name', 'p.email')
    .orderBy('p.name')
    .limit(lookedThrough)) as unknown as { id: string; name: string; email: string | null }[];
  return rows.map(({ id, name, email }) => ({ kind: 'person', id, name, about: email ?? '', to: id }));
}

/** Rounds by block and day; who walks rounds and plans none finds their own. */
async function rounds({ estateId, personId, roles }: Access): Promise<Found[]> {
  const query = Round.query()
    .alias('r')
    .joinRaw('join blocks b on b.estate_id = r.estate_id and b.id = r.block_id')
    .where('r.estateId', estateId)
    .orderBy('r.onDate', 'desc')
    .limit(lookedThrough)
    .select('r.id', 'r.planId', 'r.onDate', 'b.name as blockName');
  const ownOnly = !may(roles, 'plans.margins', 'propose');
  if (ownOnly) query.whereIn('r.id', RoundPerson.query().where({ estateId, personId }).select('roundId'));
  return ((await query) as (Round & { blockName: string })[]).map(({ id, planId, onDate, blockName }) => ({ kind: 'round', id, name: blockName, about: onDate, to: ownOnly ? id : planId }));
}

async function layers({ estateId }: Access): Promise<Found[]> {
  const rows = (await BlockLayer.query()
    .alias('k')
    .joinRaw('join layers l on l.estate_id = k.estate_id and l.id = k.layer_id and l.retired_at is null')
    .joinRaw('join blocks b on b.estate_id = k.estate_id and b.id = k.block_id and b.retired_at is null')
    .where('k.estateId', estateId)
    .orderBy(['l.name', 'b.name'])
    .limit(lookedThrough)
    .select('l.id', 'l.name', 'b.name as blockName', 'b.id as blockId')) as unknown as { id: string; name: string; blockName: string; blockId: string }[];
  return rows.map(({ id, name, blockName, blockId }) => ({ kind: 'layer', id, name, about: blockName, to: blockId }));
}

async function bags({ estateId }: Access): Promise<Found[]> {
  const rows = await Bag.query().where({ estateId }).whereNot('state', 'void').orderBy('createdAt', 'desc').limit(lookedThrough).select('id', 'code', 'roundId');
  return rows.map(({ id, code }) => ({ kind: 'bag', id, name: code, about: '', to: null }));
}
