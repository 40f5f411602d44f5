import type { Transaction } from 'objection';
import type { z } from 'zod';
import type { roundChange } from '../../../shared/contracts/rounds.ts';
import { restrictionsAt } from '../../../shared/field/entry.ts';
import { requireReach, type Access } from '../../access/access.ts';
import { Clash, Missing } from '../../errors.ts';
import { peopleWhoMay } from '../../ground/peopleWhoMay.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import { EntryRestriction } from '../../models/EntryRestriction.ts';
import { Estate } from '../../models/Estate.ts';
import { Round } from '../../models/Round.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import { Target } from '../../models/Target.ts';
import { seesOwnRoundsOnly } from './listRounds.ts';
import { say } from '../../sentences/say.ts';

/** Notes that a person has seen their round. Seen twice is seen once. */
export async function acknowledgeRound(access: Access, roundId: string, now: Date): Promise<void> {
  await RoundPerson.transaction(async (trx) => {
    const member = await RoundPerson.query(trx).findOne({ estateId: access.estateId, roundId, personId: access.personId });
    if (!member) throw new Missing(say('roundNotYours'));
    if (member.acknowledgedAt !== null) return;
    await RoundPerson.query(trx).where({ estateId: access.estateId, roundId, personId: access.personId }).patch({ acknowledgedAt: now });
    await writeAudit(trx, access, { action: 'rounds.acknowledge', subjectType: 'round', subjectId: roundId });
  });
}

/**
 * Opens, closes or calls off a round. A round cannot be opened where an entry restriction is in force for its rows.
 * Opening an open round or closing a closed one changes nothing, so that a phone may send it again; what forbids entering
 * forbids it there too. Who walks a part closes their own part; the round is closed with the last of them, or as a whole
 * by whoever sends rounds.
 */
export async function changeRound(access: Access, roundId: string, change: z.infer<typeof roundChange>, now: Date): Promise<void> {
  if (change.state === 'called off' || change.whole) requireReach(access, 'rounds.assign');
  await Round.transaction(async (trx) => {
    const round = await Round.query(trx).findOne({ estateId: access.estateId, id: roundId }).forUpdate().throwIfNotFound();
    const member = await RoundPerson.query(trx).findOne({ estateId: access.estateId, roundId, personId: access.personId });
    if (!member && seesOwnRoundsOnly(access)) throw new Missing();
    // Also where others have begun: whoever goes in now is stopped now.
    if (change.state === 'open') await refuseRestricted(trx, round, { targetIds: member?.targetIds ?? null, at: change.startedAt ?? now.toISOString() });
    if (round.state === change.state) return;
    if (round.state === 'called off') throw new Clash('calledOff', say('calledOff'));
    if (change.state === 'closed' && !change.whole && member && (await isLeftToOthers(trx, access, member, now))) return;
    if (change.state === 'called off') return callOff(trx, access, round);
    const before = { state: round.state };
    await round.$query(trx).patch({ state: change.state, closedAt: change.state === 'closed' ? now : null });
    await writeAudit(trx, access, { action: `rounds.${change.state}`, subjectType: 'round', subjectId: roundId, before, after: change });
  });
}

/** What was read on the round stays; whoever holds it is told so. */
export async function callOff(trx: Transaction, access: Access, round: Round): Promise<void> {
  const before = { state: round.state };
  await round.$query(trx).patch({ state: 'called off', closedAt: null });
  await writeAudit(trx, access, { action: 'rounds.callOff', subjectType: 'round', subjectId: round.id, before, after: { state: 'called off' } });
}

/** Notes that a member is done, and whether others still walk. */
async function isLeftToOthers(trx: Transaction, access: Access, member: RoundPerson, now: Date): Promise<boolean> {
  const { estateId, personId } = access;
  const { roundId } = member;
  if (member.finishedAt === null) {
    await RoundPerson.query(trx).where({ estateId, roundId, personId }).patch({ finishedAt: now });
    await writeAudit(trx, access, { action: 'rounds.finish', subjectType: 'round', subjectId: roundId });
  }
  return (await RoundPerson.query(trx).where({ estateId, roundId }).whereNot({ personId }).whereNull('finishedAt').resultSize()) > 0;
}

async function refuseRestricted(trx: Transaction, round: Round, { targetIds, at }: { targetIds: string[] | null; at: string }): Promise<void> {
  const { estateId, blockId } = round;
  const rules = await EntryRestriction.query(trx).where({ estateId, blockId }).whereNull('liftedAt');
  const targets = Target.query(trx).where({ estateId, planId: round.planId }).distinct('rowId');
  if (targetIds !== null) targets.whereIn('id', targetIds);
  const rowIds = (await targets).map(({ rowId }) => rowId);
  const [longest] = restrictionsAt(rules.map((rule) => ({ rowIds: rule.rowIds, startsAt: rule.startsAt.toISOString(), endsAt: rule.endsAt.toISOString(), lifted: rule.liftedAt, product: rule.product })), { at, rowIds });
  if (!longest) return;
  const [block, estate] = [await Block.query(trx).findOne({ estateId, id: blockId }).throwIfNotFound(), await Estate.query(trx).findById(estateId).throwIfNotFound()];
  const lifters = (await peopleWhoMay(trx, estateId, 'restrictions.lift')).map(({ name }) => name);
  const until = { moment: new Date(longest.endsAt), timeZone: estate.timeZone };
  throw new Clash('entryRestricted', say('entryRestricted', { block: block.name, until, product: longest.product, lifters: { oneOf: lifters } }), { until: longest.endsAt });
}
