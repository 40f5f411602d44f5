import { raw } from 'objection';
import type { SetUp } from '../../../shared/contracts/today.ts';
import { Estate } from '../../models/Estate.ts';

/** How much of each an estate has; one round trip. */
export async function countSetUp(estateId: string): Promise<SetUp> {
  const row = (await Estate.query()
    .findById(estateId)
    .select(
      raw('(select count(*)::int from blocks b where b.estate_id = estates.id and b.retired_at is null)').as('blocks'),
      raw('(select count(*)::int from layers l where l.estate_id = estates.id and l.retired_at is null)').as('layers'),
      raw("(select count(*)::int from zonings z where z.estate_id = estates.id and z.state <> 'failed')").as('zonings'),
      raw("(select count(distinct z.block_id)::int from zonings z where z.estate_id = estates.id and z.state = 'live')").as('zoned'),
      raw('(select count(*)::int from plans p where p.estate_id = estates.id)').as('plans'),
      raw('(select count(distinct m.person_id)::int from memberships m where m.estate_id = estates.id and m.ended_at is null)').as('people'),
    )
    .throwIfNotFound()) as unknown as SetUp;
  const { blocks, layers, zonings, zoned, plans, people } = row;
  return { blocks, layers, zonings, zoned, plans, people };
}
