import type { TodayOf } from '../../../shared/contracts/today.ts';
import type { Access } from '../../access/access.ts';
import { Block } from '../../models/Block.ts';
import { EntryRestriction } from '../../models/EntryRestriction.ts';
import { FileImport } from '../../models/FileImport.ts';
import { Zoning } from '../../models/Zoning.ts';
import type { Moment } from './today.ts';

const soonMs = 24 * 3_600_000;

/** Restrictions in force and those that begin within a day; one about to end says so, and one lifted early in the last day says who did. */
export async function restrictionLines({ estateId }: Access, { now }: Moment): Promise<TodayOf<'restriction'>[]> {
  const [soon, yesterday] = [new Date(now.getTime() + soonMs), new Date(now.getTime() - soonMs)];
  const rows = (await EntryRestriction.query()
    .alias('e')
    .joinRaw('join blocks b on b.estate_id = e.estate_id and b.id = e.block_id and b.retired_at is null')
    .leftJoin('people as p', 'p.id', 'e.liftedBy')
    .where('e.estateId', estateId)
    .where((query) => query.whereNull('e.liftedAt').orWhere('e.liftedAt', '>', yesterday))
    .where('e.endsAt', '>', now)
    .where('e.startsAt', '<=', soon)
    .orderBy('e.endsAt')
    .select('e.id', 'e.blockId', 'e.product', 'e.startsAt', 'e.endsAt', 'e.liftedAt', 'e.liftedReason', 'p.name as liftedByName', 'b.name as blockName')) as (EntryRestriction & { blockName: string; liftedByName: string | null })[];
  return rows.map(({ id, blockId, blockName, product, startsAt, endsAt, liftedAt, liftedByName, liftedReason }) => ({
    kind: 'restriction', id, blockId, blockName, product, startsAt: startsAt.toISOString(), endsAt: endsAt.toISOString(),
    state: liftedAt ? 'lifted' : startsAt > now ? 'comes' : endsAt <= soon ? 'endsSoon' : 'inForce',
    lifted: liftedAt ? { at: liftedAt.toISOString(), by: liftedByName ?? '–', reason: liftedReason ?? '' } : null,
  }));
}

/** Files on the import desk that wait for an answer. */
export async function questionLines({ estateId }: Access): Promise<TodayOf<'question'>[]> {
  const rows = await FileImport.query().where({ estateId, state: 'asks' }).whereNull('retiredAt').orderBy('createdAt').limit(20).select('id', 'fileName');
  return rows.map(({ id, fileName }) => ({ kind: 'question', id, fileName }));
}

/** On each block the newest zoning, when it is a proposal that nobody kept or a draft that nobody published. */
export async function zoningLines({ estateId }: Access): Promise<(TodayOf<'proposal'> | TodayOf<'draft'>)[]> {
  const rows = (await Zoning.query()
    .alias('z')
    .joinRaw('join blocks b on b.estate_id = z.estate_id and b.id = z.block_id and b.retired_at is null')
    .where('z.estateId', estateId)
    .whereIn('z.state', ['proposed', 'draft', 'live'])
    .distinctOn('z.blockId')
    .orderBy([{ column: 'z.blockId' }, { column: 'z.number', order: 'desc' }])
    .select('z.id', 'z.blockId', 'z.number', 'z.state', 'z.advisedZones', 'z.chosenZones', 'b.name as blockName')) as (Zoning & { blockName: string })[];
  return rows
    .filter(({ state }) => state !== 'live')
    .sort((one, other) => one.blockName.localeCompare(other.blockName))
    .map(({ id, blockId, blockName, number, state, advisedZones, chosenZones }) =>
      state === 'draft' ? { kind: 'draft', id, blockId, blockName, number, zones: chosenZones } : { kind: 'proposal', id, blockId, blockName, number, advisedZones },
    );
}

interface LackingRow {
  planId: string;
  blockId: string;
  blockName: string;
  number: number;
  name: string;
  wanted: number;
  read: number;
}

/**
 * Zones whose plan is not read to the end, for the newest locked plan of each block that was sent out: the vines wanted by the
 * measure that needs most, less the vines read for it. A plan that was never sent lacks a round, not readings.
 */
export async function lackingLines({ estateId }: Access): Promise<TodayOf<'lacking'>[]> {
  const { rows } = (await Block.knex().raw(
    `with newest as (
       select distinct on (p.block_id) p.id, p.block_id from plans p
       where p.estate_id = :estateId and p.state = 'locked'
         and exists (select 1 from rounds r where r.estate_id = p.estate_id and r.plan_id = p.id and r.state in ('open', 'closed'))
       order by p.block_id, p.locked_at desc)
     select n.id as "planId", b.id as "blockId", b.name as "blockName", z.number, z.name, max(q.samples)::int as wanted, coalesce(max(done.vines), 0)::int as read
     from newest n
     join blocks b on b.estate_id = :estateId and b.id = n.block_id and b.retired_at is null
     join quotas q on q.estate_id = :estateId and q.plan_id = n.id
     join zones z on z.estate_id = :estateId and z.id = q.zone_id
     left join lateral (
       select count(distinct t.id) as vines from targets t
       join readings r on r.estate_id = t.estate_id and r.target_id = t.id and r.measure_code = q.measure_code
       where t.estate_id = :estateId and t.plan_id = n.id and t.zone_id = q.zone_id) done on true
     group by n.id, b.id, b.name, z.number, z.name
     having max(q.samples - coalesce(done.vines, 0)) > 0
     order by b.name, z.number`,
    { estateId },
  )) as { rows: LackingRow[] };
  const lines = new Map<string, TodayOf<'lacking'>>();
  for (const { planId, blockId, blockName, number, name, wanted, read } of rows) {
    const line = lines.get(planId) ?? { kind: 'lacking' as const, id: planId, blockId, blockName, zones: [] };
    line.zones.push({ number, name, wanted, read });
    lines.set(planId, line);
  }
  return [...lines.values()];
}
