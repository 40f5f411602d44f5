import type { PhoneAnswer, PhoneState, PhoneView } from '../../../shared/contracts/phones.ts';
import type { Access } from '../../access/access.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Person } from '../../models/Person.ts';
import { Phone } from '../../models/Phone.ts';
import { Reading } from '../../models/Reading.ts';

/** Notes how a phone stands at this contact, and tells it when it was reported lost. */
export async function checkIn(access: Access, state: PhoneState, now: Date): Promise<PhoneAnswer> {
  const { estateId, personId } = access;
  const facts = { personId, lastContactAt: now, waiting: state.waiting, isReady: state.isReady, clockOffS: Math.round((Date.parse(state.deviceTime) - now.getTime()) / 1000) };
  await Phone.query().insert({ estateId, deviceId: state.deviceId, ...facts }).onConflict(['estateId', 'deviceId']).merge(Object.keys(facts));
  const stored = await Phone.query().findOne({ estateId, deviceId: state.deviceId }).throwIfNotFound();
  const isLost = stored.lostAt !== null;
  if (isLost && state.waiting === 0 && stored.emptiedAt === null) await stored.$query().patch({ emptiedAt: now });
  return { isLost, serverTime: now.toISOString() };
}

/** Phones that were used here, latest contact first, with the time of the last reading received from each. */
export async function listPhones(access: Access): Promise<PhoneView[]> {
  const { estateId } = access;
  const phones = await Phone.query().where({ estateId }).orderBy('lastContactAt', 'desc').limit(100);
  const last = (await Reading.query().where({ estateId }).whereIn('deviceId', phones.map(({ deviceId }) => deviceId)).groupBy('deviceId').select('deviceId').max('takenAt as at')) as unknown as { deviceId: string; at: Date }[];
  const people = await Person.query().findByIds([...new Set(phones.flatMap(({ personId, lostBy }) => [personId, lostBy ?? personId]))]).select('id', 'name');
  const nameOf = (id: string | null) => people.find((person) => person.id === id)?.name ?? '';
  return phones.map((phone) => ({
    id: phone.id,
    person: nameOf(phone.personId),
    lastContactAt: phone.lastContactAt.toISOString(),
    lastReadingAt: last.find(({ deviceId }) => deviceId === phone.deviceId)?.at.toISOString() ?? null,
    waiting: phone.waiting,
    isReady: phone.isReady,
    clockOffMin: Math.round(phone.clockOffS / 60),
    lost: phone.lostAt ? { at: phone.lostAt.toISOString(), by: nameOf(phone.lostBy) } : null,
    emptiedAt: phone.emptiedAt?.toISOString() ?? null,
  }));
}

/** Reports a phone lost: at its next contact it sends what waits, empties itself and signs out. Found again before that, it is taken back. */
export async function reportLost(access: Access, phoneId: string, { isLost, now }: { isLost: boolean; now: Date }): Promise<void> {
  await Phone.transaction(async (trx) => {
    const phone = await Phone.query(trx).findOne({ estateId: access.estateId, id: phoneId }).throwIfNotFound();
    await phone.$query(trx).patch(isLost ? { lostAt: now, lostBy: access.personId, emptiedAt: null } : { lostAt: null, lostBy: null, emptiedAt: null });
    await writeAudit(trx, access, { action: isLost ? 'phones.lost' : 'phones.found', subjectType: 'phone', subjectId: phoneId, after: { lastContactAt: phone.lastContactAt.toISOString(), waiting: phone.waiting } });
  });
}
