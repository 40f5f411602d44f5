import type { Transaction } from 'objection';
import { may } from '../../../shared/catalog/permissions.ts';
import type { PlanBasis } from '../../../shared/contracts/planBasis.ts';
import type { NewRound } from '../../../shared/contracts/rounds.ts';
import { toUtm } from '../../../shared/geo/utm.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import type { SharedRound, WalkShare } from '../../ground/shareRound.ts';
import { loadTerrain } from '../../ground/terrain.ts';
import { queueMail } from '../../mail/outbox.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Estate } from '../../models/Estate.ts';
import { Membership } from '../../models/Membership.ts';
import { Person } from '../../models/Person.ts';
import { Plan } from '../../models/Plan.ts';
import { Round } from '../../models/Round.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import { Target } from '../../models/Target.ts';
import { runCompute } from '../../workers/computePool.ts';
import { loadPlanGround } from '../plans/planGround.ts';
import { shareInputOf } from '../plans/walkInput.ts';
import { closedWords, longestOn } from './closedOn.ts';
import type { RoundWalk } from './roundWalk.ts';
import { say } from '../../sentences/say.ts';

/** A round ready to be stored: people checked, the walk shared. */
export interface PreparedRound {
  plan: Plan;
  input: NewRound;
  people: Person[];
  walk: RoundWalk;
  vines: number;
  day: { place: number; wayS: number | null } | null;
}

/** Sends a plan's vines to people for a day: the walk is shared so that loads are even, and each gets a mail. */
export async function makeRound(access: Access, planId: string, input: NewRound, options: { publicUrl: string }): Promise<{ id: string }> {
  const prepared = await prepareRound(access, planId, input, null);
  return Round.transaction((trx) => storeRound(trx, access, prepared, options));
}

/** Checks plan and people and lays the walks; writes nothing. */
export async function prepareRound(access: Access, planId: string, input: NewRound, day: PreparedRound['day']): Promise<PreparedRound> {
  const { estateId } = access;
  const plan = await Plan.query().findOne({ estateId, id: planId }).throwIfNotFound();
  if (plan.state === 'draft') throw new Clash('notLocked', say('notLocked', { plan: plan.name }));
  if (plan.state === 'closed') throw new Clash('closed', say('planClosed', { plan: plan.name }));
  const people = await walkersOf(estateId, input.people);
  const targets = await Target.query().where({ estateId, planId }).orderBy('walkOrder');
  const shares = await sharesOf(access, plan, targets, { ...input, people: people.length });
  const walk: RoundWalk = {
    shares: people.map((person, i) => ({
      personId: person.id, lengthM: shares[i]!.lengthM, walkingS: shares[i]!.walkingS, serviceS: shares[i]!.serviceS,
      stops: shares[i]!.lines.map(({ target, number, enterBy, heading, ahead, aheadFrom, opensZone }) => ({ targetId: targets[target]!.id, number, enterBy, heading, ahead, aheadFrom, opensZone })),
    })),
  };
  return { plan, input, people, walk, vines: targets.length, day };
}

/** Stores a prepared round with its mails and its line of history. */
export async function storeRound(trx: Transaction, access: Access, { plan, input, people, walk, vines, day }: PreparedRound, options: { publicUrl: string }): Promise<{ id: string }> {
  const { estateId } = access;
  const round = await Round.query(trx).insert({ estateId, planId: plan.id, blockId: plan.blockId, onDate: input.onDate, gate: input.gate, notes: input.notes, walk, dayPlace: day?.place ?? null, wayS: day?.wayS ?? null, createdBy: access.personId });
  await RoundPerson.query(trx).insert(walk.shares.map(({ personId, stops }) => ({ estateId, roundId: round.id, personId, targetIds: stops.map(({ targetId }) => targetId) })));
  await tell(trx, { access, plan, input, people, walk, link: `${options.publicUrl}/e/${estateId}/field/rounds/${round.id}` });
  await writeAudit(trx, access, { action: 'rounds.send', subjectType: 'round', subjectId: round.id, subjectName: plan.name, after: { ...input, vines, ...(day ? { dayPlace: day.place } : {}) } });
  return { id: round.id };
}

/** The people of a round, in the order chosen; all must be allowed to record here. */
async function walkersOf(estateId: string, ids: string[]): Promise<Person[]> {
  const memberships = await Membership.query().where({ estateId }).whereIn('personId', ids).whereNull('endedAt').whereRaw('starts_on <= current_date and (ends_on is null or ends_on >= current_date)').select('personId', 'role');
  const people = await Person.query().findByIds(ids).select('id', 'name', 'email', 'language');
  return ids.map((id) => {
    const person = people.find((one) => one.id === id);
    const roles = memberships.filter(({ personId }) => personId === id).map(({ role }) => role);
    if (!person || !may(roles, 'readings.record', 'own')) throw new Unusable('notAWalker', person && roles.length > 0 ? say('notAWalker', { name: person.name }) : say('notAWalkerHere'));
    return person;
  });
}

async function sharesOf(access: Access, plan: Plan, targets: Target[], { people, gateAt, end }: { people: number } & Pick<NewRound, 'gateAt' | 'end'>): Promise<WalkShare[]> {
  const planGround = await loadPlanGround(access.estateId, plan.zoningId);
  const gateXY = gateAt === null ? planGround.gateXY : toUtm(gateAt, planGround.ground.block.epsg);
  const { walks } = await runCompute<SharedRound>('shareRound', shareInputOf(planGround, plan, targets, { gateXY, people, end, terrain: await loadTerrain(access.estateId, planGround.ground) }), { lane: 'quick' });
  return walks;
}

interface Assignment {
  access: Access;
  plan: Plan;
  input: NewRound;
  people: Person[];
  walk: RoundWalk;
  link: string;
}

async function tell(trx: Transaction, { access, plan, input, people, walk, link }: Assignment): Promise<void> {
  const estate = await Estate.query(trx).findById(access.estateId).throwIfNotFound();
  const closed = await longestOn(trx, { estateId: access.estateId, blockId: plan.blockId, day: input.onDate, timeZone: estate.timeZone });
  const { basis } = plan.result as { basis: PlanBasis };
  for (const [i, person] of people.entries()) {
    if (person.email === null) continue;
    const date = new Intl.DateTimeFormat(person.language, { timeZone: 'UTC', weekday: 'long', day: 'numeric', month: 'long' }).format(new Date(`${input.onDate}T12:00:00Z`));
    await queueMail(trx, {
      estateId: access.estateId,
      kind: 'assignment',
      to: { address: person.email, name: person.name, language: person.language },
      facts: {
        estate: estate.name,
        block: basis.blockName,
        date,
        vines: walk.shares[i]!.stops.length,
        gate: input.gate || '–',
        link,
        notes: [closed && closedWords(closed, person.language, estate.timeZone), input.notes].filter(Boolean).join('\n\n'),
      },
    });
  }
}
