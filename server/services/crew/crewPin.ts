import type { NewCrewPerson } from '../../../shared/contracts/phones.ts';
import type { Access } from '../../access/access.ts';
import { hashPassword, passwordMatches } from '../../access/passwords.ts';
import { Missing, NotSignedIn, TooMuch, Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { CrewPin } from '../../models/CrewPin.ts';
import { Membership } from '../../models/Membership.ts';
import { Person } from '../../models/Person.ts';
import { estateOfCode } from './crewCode.ts';
import { crewOnlyPeople } from './crewOnlyPeople.ts';
import { say } from '../../sentences/say.ts';

/** Wrong PINs in a row until the name is locked, and for how long at first; each further lock is twice as long. */
const triesBeforeLock = 5;
const firstLockMin = 15;
const longestLockMin = 24 * 60;

/** Takes somebody of the crew in who has no e-mail. */
export async function addCrewPerson(access: Access, input: NewCrewPerson): Promise<{ id: string }> {
  const pinHash = await hashPassword(input.pin);
  return Person.transaction(async (trx) => {
    const person = await Person.query(trx).insert({ name: input.name, language: input.language, email: null });
    await Membership.query(trx).insert({ estateId: access.estateId, personId: person.id, role: 'crew' });
    await CrewPin.query(trx).insert({ estateId: access.estateId, personId: person.id, pinHash, setBy: access.personId });
    await writeAudit(trx, access, { action: 'crew.add', subjectType: 'person', subjectId: person.id, subjectName: person.name, after: { role: 'crew' } });
    return { id: person.id };
  });
}

/** Gives a PIN, or a new one, which also opens a locked name. */
export async function setPin(access: Access, personId: string, pin: string): Promise<void> {
  const pinHash = await hashPassword(pin);
  await CrewPin.transaction(async (trx) => {
    const [person] = (await crewOnlyPeople(access.estateId, trx)).filter(({ id }) => id === personId);
    if (!person) {
      const isMember = await Membership.query(trx).findOne({ estateId: access.estateId, personId });
      if (!isMember) throw new Missing();
      throw new Unusable('notCrewOnly', say('notCrewOnly'));
    }
    await CrewPin.query(trx).insert({ estateId: access.estateId, personId, pinHash, setBy: access.personId, setAt: new Date(), failures: 0, lockedUntil: null }).onConflict(['estateId', 'personId']).merge();
    await writeAudit(trx, access, { action: 'crew.setPin', subjectType: 'person', subjectId: personId, subjectName: person.name });
  });
}

/** Signs in with code, name and PIN. A try is counted before it is checked, so that many at once gain nothing. */
export async function signInWithPin({ code, personId, pin }: { code: string; personId: string; pin: string }, now: Date): Promise<{ personId: string }> {
  const estateId = await estateOfCode(code, now);
  const isCrew = (await crewOnlyPeople(estateId)).some(({ id }) => id === personId);
  const counted = await countTry(estateId, personId, now);
  const fits = await passwordMatches(isCrew ? (counted?.pinHash ?? null) : null, pin);
  if (!fits || !counted) {
    const locked = await CrewPin.query().findOne({ estateId, personId }).where('lockedUntil', '>', now);
    if (locked) throw new TooMuch('pinLocked', say('pinLocked', { time: locked.lockedUntil!.toISOString().slice(11, 16) }), { until: locked.lockedUntil!.toISOString() });
    throw new NotSignedIn(say('wrongPin'));
  }
  await CrewPin.query().where({ estateId, personId }).patch({ failures: 0, lockedUntil: null });
  return { personId };
}

/** Counts one try, and locks the name when it is one of every fifth. Undefined when the name is locked or has no PIN. */
async function countTry(estateId: string, personId: string, now: Date): Promise<CrewPin | undefined> {
  return CrewPin.transaction(async (trx) => {
    const pin = await CrewPin.query(trx).findOne({ estateId, personId }).forUpdate();
    if (!pin || (pin.lockedUntil !== null && pin.lockedUntil > now)) return undefined;
    const failures = pin.failures + 1;
    const lockMin = failures % triesBeforeLock === 0 ? Math.min(longestLockMin, firstLockMin * 2 ** (failures / triesBeforeLock - 1)) : 0;
    await CrewPin.query(trx).where({ estateId, personId }).patch({ failures, lockedUntil: lockMin > 0 ? new Date(now.getTime() + lockMin * 60_000) : null });
    return pin;
  });
}
