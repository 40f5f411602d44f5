import { reachOf } from '../../../shared/catalog/permissions.ts';
import { planChoices } from '../../../shared/contracts/planChoices.ts';
import type { RoundSummary } from '../../../shared/contracts/rounds.ts';
import type { Access } from '../../access/access.ts';
import { Block } from '../../models/Block.ts';
import { Person } from '../../models/Person.ts';
import { Plan } from '../../models/Plan.ts';
import { Reading } from '../../models/Reading.ts';
import { Round } from '../../models/Round.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import type { RoundWalk } from './roundWalk.ts';

/** True where the person sees nothing but the rounds they walk. */
export function seesOwnRoundsOnly(access: Access): boolean {
  return reachOf(access.roles, 'readings.record') === 'own';
}

/** Rounds, the latest day first; crew and lab see their own. */
export async function listRounds(access: Access, filter: { planId?: string; blockId?: string; roundId?: string } = {}): Promise<RoundSummary[]> {
  const { estateId } = access;
  const query = Round.query().where({ estateId }).orderBy('onDate', 'desc').orderBy('createdAt', 'desc').limit(200);
  if (filter.planId) query.where({ planId: filter.planId });
  if (filter.blockId) query.where({ blockId: filter.blockId });
  if (filter.roundId) query.where({ id: filter.roundId });
  if (seesOwnRoundsOnly(access)) query.whereIn('id', RoundPerson.query().where({ estateId, personId: access.personId }).select('roundId'));
  const rounds = await query;
  const ids = rounds.map(({ id }) => id);
  const [plans, blocks, members, done] = await Promise.all([
    Plan.query().where({ estateId }).findByIds([...new Set(rounds.map(({ planId }) => planId))]).select('id', 'name', 'options'),
    Block.query().where({ estateId }).findByIds([...new Set(rounds.map(({ blockId }) => blockId))]).select('id', 'name'),
    RoundPerson.query().where({ estateId }).whereIn('roundId', ids),
    Reading.query().where({ estateId }).whereIn('roundId', ids).whereNotNull('targetId').groupBy('roundId').select('roundId').countDistinct('targetId as count') as unknown as Promise<{ roundId: string; count: number }[]>,
  ]);
  const people = await Person.query().findByIds([...new Set(members.map(({ personId }) => personId))]).select('id', 'name');
  return rounds.map((round) => {
    const plan = plans.find(({ id }) => id === round.planId);
    const { shares } = round.walk as RoundWalk;
    const here = members.filter(({ roundId }) => roundId === round.id);
    const atOf = (personId: string, what: 'acknowledgedAt' | 'finishedAt') => here.find((member) => member.personId === personId)?.[what]?.toISOString() ?? null;
    return {
      id: round.id,
      planId: round.planId,
      planName: plan?.name ?? '',
      blockId: round.blockId,
      blockName: blocks.find(({ id }) => id === round.blockId)?.name ?? '',
      onDate: round.onDate,
      state: round.state,
      dayPlace: round.dayPlace,
      gate: round.gate,
      notes: round.notes,
      people: shares.map((share) => ({
        id: share.personId,
        name: people.find(({ id }) => id === share.personId)?.name ?? '',
        vines: share.stops.length,
        seconds: share.walkingS + share.serviceS,
        acknowledgedAt: atOf(share.personId, 'acknowledgedAt'),
        finishedAt: atOf(share.personId, 'finishedAt'),
      })),
      vines: shares.reduce((sum, { stops }) => sum + stops.length, 0),
      done: Number(done.find(({ roundId }) => roundId === round.id)?.count ?? 0),
      measures: plan ? planChoices.parse(plan.options).measures.map(({ code }) => code) : [],
      isMine: here.some(({ personId }) => personId === access.personId),
    };
  });
}
