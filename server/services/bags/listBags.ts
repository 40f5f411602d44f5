import type { BagLine } from '../../../shared/contracts/bags.ts';
import { may, reachOf } from '../../../shared/catalog/permissions.ts';
import type { Access } from '../../access/access.ts';
import { zoneOfBag } from '../../ground/bagZone.ts';
import { loadBlockVines, zonesOfVines, type BlockVines } from '../../ground/blockVines.ts';
import { zonesInForce } from '../../ground/zonesInForce.ts';
import { Bag } from '../../models/Bag.ts';
import { Person } from '../../models/Person.ts';
import { Reading } from '../../models/Reading.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import { Zone } from '../../models/Zone.ts';
import { vineWords } from '../plans/viewPlan.ts';

const usualDays = 45;
const most = 600;

export interface BagFilter {
  round?: string | undefined;
  days?: number | undefined;
  now: Date;
}

/** Bags with where they stand, newest first; void ones stay in the list. Crew see those of their own rounds. */
export async function listBags(access: Access, filter: BagFilter): Promise<BagLine[]> {
  const { estateId } = access;
  const since = new Date(filter.now.getTime() - (filter.days ?? usualDays) * 86_400_000);
  const query = Bag.query().where({ estateId }).whereNot({ state: 'printed' }).whereRaw('coalesce(closed_at, received_at, created_at) >= ?', [since]).orderByRaw('coalesce(closed_at, received_at, created_at) desc').orderBy('code').limit(most);
  if (filter.round) query.where({ roundId: filter.round });
  if (reachOf(access.roles, 'readings.record') === 'own' && !may(access.roles, 'lab.enter', 'propose')) query.whereIn('roundId', RoundPerson.query().where({ estateId, personId: access.personId }).select('roundId'));
  return describeBags(access, await query);
}

/** Bags as lines of the list, in the order given, with names as far as the role reaches. */
export async function describeBags(access: Access, bags: readonly Bag[]): Promise<BagLine[]> {
  const { estateId } = access;
  const [people, counts, places] = await Promise.all([
    Person.query().findByIds([...new Set(bags.flatMap(({ closedBy, receivedBy }) => [closedBy, receivedBy]).filter((id) => id !== null))]).select('id', 'name'),
    Reading.query().where({ estateId, source: 'lab' }).whereIn('bagId', bags.map(({ id }) => id)).groupBy('bagId').select('bagId').count('id as count') as unknown as Promise<{ bagId: string; count: number }[]>,
    placesOf(estateId, bags),
  ]);
  // Whoever receives bags must be able to ask the person who had them last; elsewhere names show as far as the role reaches.
  const seesNames = may(access.roles, 'lab.enter', 'propose') || may(access.roles, 'names.see');
  const nameOf = (id: string | null) => (id !== null && (seesNames || id === access.personId) ? (people.find((person) => person.id === id)?.name ?? null) : null);
  return bags.map((bag) => {
    const { berries = null, sunSide = null, shadeSide = null, wet = null, rotPercent = null, note = '' } = bag.facts;
    return {
      id: bag.id, code: bag.code, place: placeOf(bag), roundId: bag.roundId, blockId: bag.blockId, ...places(bag), vines: bag.vines.length,
      berries, sunSide, shadeSide, wet, rotPercent, note,
      holder: nameOf(bag.closedBy), closedAt: iso(bag.closedAt), receivedAt: iso(bag.receivedAt), receivedBy: nameOf(bag.receivedBy),
      missingAt: iso(bag.missingAt), swappedAt: iso(bag.swappedAt), clashesWith: bag.clashesWith,
      results: Number(counts.find(({ bagId }) => bagId === bag.id)?.count ?? 0),
    };
  });
}

const iso = (at: Date | null) => at?.toISOString() ?? null;

function placeOf(bag: Bag): BagLine['place'] {
  if (bag.state === 'void') return 'void';
  if (bag.clashesWith !== null) return 'clash';
  if (bag.closedAt === null) return 'extra';
  if (bag.state === 'received') return 'here';
  return bag.missingAt === null ? 'expected' : 'missing';
}

type Place = Pick<BagLine, 'blockName' | 'zone' | 'zoneName' | 'rowLabel' | 'vineNumber' | 'vinePlace'>;

/** Block, zone by the zones in force, and first vine in the block's own numbers; each block is laid out once. */
async function placesOf(estateId: string, bags: readonly Bag[]): Promise<(bag: Bag) => Place> {
  const grounds = new Map<string, { ground: BlockVines; zoneOf: Uint8Array | null; zones: Zone[] }>();
  for (const blockId of new Set(bags.flatMap((bag) => bag.blockId ?? []))) {
    const ground = await loadBlockVines(estateId, blockId);
    const zoning = await zonesInForce(estateId).where({ blockId }).first();
    const zones = zoning ? await Zone.query().where({ estateId, zoningId: zoning.id }).select('id', 'number', 'name') : [];
    grounds.set(blockId, { ground, zoneOf: zoning ? zonesOfVines(ground, zoning) : null, zones });
  }
  return (bag) => {
    const here = grounds.get(bag.blockId ?? '');
    if (!here) return { blockName: null, zone: null, zoneName: null, rowLabel: null, vineNumber: null };
    const zone = here.zoneOf ? zoneOfBag(here.ground, here.zoneOf, bag.vines) : 0;
    return { blockName: here.ground.block.name, zone: zone || null, zoneName: here.zones.find(({ number }) => number === zone)?.name ?? null, ...firstVine(here.ground, bag) };
  };
}

function firstVine(ground: BlockVines, bag: Bag): Pick<Place, 'rowLabel' | 'vineNumber' | 'vinePlace'> {
  const [first] = bag.vines;
  if (!first || !ground.rowIndexOf.has(first.rowId)) return { rowLabel: null, vineNumber: null };
  const { rowLabel, vineNumber, place } = vineWords(ground, first.rowId, first.ordinal);
  return { rowLabel, vineNumber, ...(place ? { vinePlace: place } : {}) };
}
