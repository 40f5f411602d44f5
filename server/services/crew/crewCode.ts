import { randomInt } from 'node:crypto';
import type { CrewCodeState, CrewOffer } from '../../../shared/contracts/phones.ts';
import { LABEL_LETTERS } from '../../../shared/field/labelCode.ts';
import type { Access } from '../../access/access.ts';
import { hashToken } from '../../access/passwords.ts';
import { Missing } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { CrewCode } from '../../models/CrewCode.ts';
import { CrewPin } from '../../models/CrewPin.ts';
import { Estate } from '../../models/Estate.ts';
import { crewOnlyPeople } from './crewOnlyPeople.ts';
import { say } from '../../sentences/say.ts';

const days = 90;
/** Eight of nineteen letters: 1.7·10¹⁰ codes, behind a limit of tries. */
const letters = 8;

/** Makes the code with which a phone finds the crew of the estate; the one before ends. It is shown once. */
export async function makeCrewCode(access: Access, now: Date): Promise<{ code: string; expiresAt: string }> {
  const code = Array.from({ length: letters }, () => LABEL_LETTERS[randomInt(LABEL_LETTERS.length)]).join('');
  const expiresAt = new Date(now.getTime() + days * 86_400_000);
  await CrewCode.transaction(async (trx) => {
    await CrewCode.query(trx).where({ estateId: access.estateId }).whereNull('endedAt').patch({ endedAt: now });
    const made = await CrewCode.query(trx).insert({ estateId: access.estateId, codeHash: hashToken(code), expiresAt, madeBy: access.personId });
    await writeAudit(trx, access, { action: 'crew.makeCode', subjectType: 'crewCode', subjectId: made.id, after: { expiresAt: expiresAt.toISOString() } });
  });
  return { code: `${code.slice(0, 4)} ${code.slice(4)}`, expiresAt: expiresAt.toISOString() };
}

export async function endCrewCode(access: Access, now: Date): Promise<void> {
  await CrewCode.transaction(async (trx) => {
    const open = await CrewCode.query(trx).findOne({ estateId: access.estateId }).whereNull('endedAt').throwIfNotFound();
    await open.$query(trx).patch({ endedAt: now });
    await writeAudit(trx, access, { action: 'crew.endCode', subjectType: 'crewCode', subjectId: open.id });
  });
}

/** Whether a code is open, and who of the crew could sign in with it. */
export async function crewCodeState(access: Access, now: Date): Promise<CrewCodeState> {
  const open = await CrewCode.query().findOne({ estateId: access.estateId }).whereNull('endedAt').where('expiresAt', '>', now);
  const people = await crewOnlyPeople(access.estateId);
  const pins = await CrewPin.query().where({ estateId: access.estateId });
  return {
    expiresAt: open?.expiresAt.toISOString() ?? null,
    people: people.map(({ id, name }) => {
      const pin = pins.find(({ personId }) => personId === id);
      return { id, name, hasPin: pin !== undefined, lockedUntil: pin?.lockedUntil && pin.lockedUntil > now ? pin.lockedUntil.toISOString() : null };
    }),
  };
}

/** The estate of a code. Wrong, ended and expired codes answer the same. */
export async function estateOfCode(typed: string, now: Date): Promise<string> {
  const code = typed.toUpperCase().replace(/[^A-Z]/g, '');
  const open = await CrewCode.query().findOne({ codeHash: hashToken(code) }).whereNull('endedAt').where('expiresAt', '>', now);
  if (!open) throw new Missing(say('unknownCrewCode'));
  return open.estateId;
}

/** Names to choose from on a shared phone. */
export async function crewOffer(typed: string, now: Date): Promise<CrewOffer> {
  const estateId = await estateOfCode(typed, now);
  const estate = await Estate.query().findById(estateId).throwIfNotFound();
  const pins = await CrewPin.query().where({ estateId }).select('personId');
  const people = (await crewOnlyPeople(estateId)).filter(({ id }) => pins.some(({ personId }) => personId === id));
  return { estate: estate.name, people: people.map(({ id, name }) => ({ id, name })) };
}
