import { raw } from 'objection';
import { reachOf } from '../../../shared/catalog/permissions.ts';
import type { NoticeBody } from '../../../shared/contracts/notices.ts';
import type { TodayOf } from '../../../shared/contracts/today.ts';
import type { Access } from '../../access/access.ts';
import { Bag } from '../../models/Bag.ts';
import { NoticeReader } from '../../models/NoticeReader.ts';
import { PickNotice } from '../../models/PickNotice.ts';
import { Reading } from '../../models/Reading.ts';
import { ReadingConflict } from '../../models/ReadingConflict.ts';
import { Round } from '../../models/Round.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import { Target } from '../../models/Target.ts';
import { Vine } from '../../models/Vine.ts';
import type { Moment } from './today.ts';

type RoundRow = Round & { blockName: string; vines: number; done: number };

/** Rounds that are sent or open, the earliest first; who walks rounds and plans none sees their own. */
export async function roundLines(access: Access, { day }: Moment): Promise<TodayOf<'round'>[]> {
  const { estateId, personId } = access;
  const query = Round.query()
    .alias('r')
    .joinRaw('join blocks b on b.estate_id = r.estate_id and b.id = r.block_id')
    .where('r.estateId', estateId)
    .whereIn('r.state', ['sent', 'open'])
    .orderBy(['r.onDate', 'b.name'])
    .limit(50)
    .select('r.id', 'r.planId', 'r.blockId', 'r.onDate', 'r.state', 'b.name as blockName')
    .select(Target.query().alias('t').whereColumn('t.planId', 'r.planId').where('t.estateId', estateId).select(raw('count(*)::int')).as('vines'))
    .select(Reading.query().alias('d').whereColumn('d.roundId', 'r.id').where('d.estateId', estateId).select(raw('count(distinct target_id)::int')).as('done'));
  if (reachOf(access.roles, 'readings.record') === 'own') query.whereIn('r.id', RoundPerson.query().where({ estateId, personId }).select('roundId'));
  const rounds = (await query) as RoundRow[];
  const mine = await RoundPerson.query().where({ estateId, personId }).whereIn('roundId', rounds.map(({ id }) => id));
  return rounds.map(({ id, planId, blockId, blockName, onDate, state, vines, done }) => {
    const own = mine.find(({ roundId }) => roundId === id);
    return {
      kind: 'round', id, planId, blockId, blockName, onDate, done, vines: own?.targetIds?.length ?? vines, isMine: own !== undefined, seen: own === undefined || own.acknowledgedAt !== null,
      state: onDate < day ? 'late' : onDate === day ? 'today' : state === 'open' ? 'open' : 'ahead',
    };
  });
}

/** Pick notices addressed to the person that they have not read; void ones and those whose day is over are left out. */
export async function noticeLines({ estateId, personId }: Access, { day }: Moment): Promise<TodayOf<'notice'>[]> {
  const notices = await PickNotice.query().where({ estateId }).whereNull('voidAt').whereRaw("body ->> 'pickOn' >= ?", [day]).whereIn('id', NoticeReader.query().where({ personId }).whereNull('readAt').select('noticeId')).orderBy('number');
  return notices.map(({ id, number, body }) => {
    const { lotName, pickOn } = body as NoticeBody;
    return { kind: 'notice', id, number, lotName, pickOn };
  });
}

/** Readings of one vine that say different things, until somebody settles them. */
export async function conflictLines({ estateId }: Access): Promise<TodayOf<'conflict'>[]> {
  const total = await ReadingConflict.query().where({ estateId, state: 'open' }).resultSize();
  return total > 0 ? [{ kind: 'conflict', total }] : [];
}

/** Labels that are on two bags, until somebody says which is which. */
export async function labelLines({ estateId }: Access): Promise<TodayOf<'labelTwice'>[]> {
  const total = await Bag.query().where({ estateId }).whereNotNull('clashesWith').whereNot({ state: 'void' }).resultSize();
  return total > 0 ? [{ kind: 'labelTwice', total }] : [];
}

/** Vines that the crew marked as missing, dead or otherwise, block by block, until somebody takes them over. */
export async function markLines({ estateId }: Access): Promise<TodayOf<'marks'>[]> {
  const rows = (await Vine.query()
    .alias('v')
    .joinRaw('join blocks b on b.estate_id = v.estate_id and b.id = v.block_id and b.retired_at is null')
    .where('v.estateId', estateId)
    .where('v.proposed', true)
    .groupBy('b.id', 'b.name')
    .orderBy('b.name')
    .select('b.id as blockId', 'b.name as blockName', raw('count(*)::int as vines'))) as unknown as { blockId: string; blockName: string; vines: number }[];
  return rows.map(({ blockId, blockName, vines }) => ({ kind: 'marks', blockId, blockName, vines }));
}
