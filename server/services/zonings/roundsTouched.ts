import type { Transaction } from 'objection';
import type { PublishEffects } from '../../../shared/contracts/zonings.ts';
import { vineIndex } from '../../../shared/geo/vines.ts';
import { requireReach, type Access } from '../../access/access.ts';
import { Missing } from '../../errors.ts';
import type { BlockVines } from '../../ground/blockVines.ts';
import { Person } from '../../models/Person.ts';
import { Reading } from '../../models/Reading.ts';
import { Round } from '../../models/Round.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import { Target } from '../../models/Target.ts';
import { callOff } from '../rounds/changeRound.ts';

export interface RoundsUnderWay {
  readonly rounds: PublishEffects['openRounds'];
  /** Vines without a reading that somebody is still to visit, each once; those that left the block are not among them. */
  readonly toVisit: readonly number[];
}

/** Rounds of a block that were sent or are under way. */
export async function roundsUnderWay({ estateId }: Access, ground: BlockVines): Promise<RoundsUnderWay> {
  const rounds = await Round.query().where({ estateId, blockId: ground.block.id }).whereIn('state', ['sent', 'open']).orderBy('onDate');
  const ids = rounds.map(({ id }) => id);
  const [sent, targets, read] = await Promise.all([
    RoundPerson.query().where({ estateId }).whereIn('roundId', ids),
    Target.query().where({ estateId }).whereIn('planId', rounds.map(({ planId }) => planId)).select('id', 'planId', 'rowId', 'ordinal'),
    Reading.query().where({ estateId }).whereIn('roundId', ids).whereNotNull('targetId').distinct('roundId', 'targetId'),
  ]);
  const people = await Person.query().findByIds([...new Set(sent.map(({ personId }) => personId))]).select('id', 'name');
  const toVisit = new Set<number>();
  const lines = rounds.map(({ id, planId, onDate }) => {
    const members = sent.filter(({ roundId }) => roundId === id);
    const theirs = new Set(members.flatMap(({ targetIds }) => targetIds ?? []));
    const own = targets.filter((target) => target.planId === planId && (members.some(({ targetIds }) => targetIds === null) || theirs.has(target.id)));
    const done = new Set(read.filter(({ roundId }) => roundId === id).map(({ targetId }) => targetId));
    for (const { id: targetId, rowId, ordinal } of own) {
      const row = ground.rowIndexOf.get(rowId);
      const vine = row === undefined ? -1 : vineIndex(ground.vines, row, ordinal);
      if (vine >= 0 && !done.has(targetId)) toVisit.add(vine);
    }
    return { id, planId, onDate, people: members.map(({ personId }) => people.find((person) => person.id === personId)?.name ?? ''), vines: own.length, done: own.filter((target) => done.has(target.id)).length };
  });
  return { rounds: lines, toVisit: [...toVisit] };
}

/** Calls off those of them that are still under way; what was closed meanwhile stays closed. */
export async function callOffRounds(trx: Transaction, access: Access, { blockId, roundIds }: { blockId: string; roundIds: readonly string[] }): Promise<void> {
  if (roundIds.length === 0) return;
  requireReach(access, 'rounds.assign');
  const rounds = await Round.query(trx).where({ estateId: access.estateId, blockId }).whereIn('id', [...roundIds]).forUpdate();
  if (rounds.length < new Set(roundIds).size) throw new Missing();
  for (const round of rounds) if (round.state === 'sent' || round.state === 'open') await callOff(trx, access, round);
}
