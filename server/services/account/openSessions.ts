import type { OpenSession } from '../../../shared/contracts/account.ts';
import { hashToken } from '../../access/passwords.ts';
import { Missing } from '../../errors.ts';
import { endSessions, SessionRecord, sessionsOf } from '../../models/SessionRecord.ts';
import { say } from '../../sentences/say.ts';

/** How long a session lasts after its last use; when it was used last follows from when it runs out. */
export const sessionMs = 7 * 86_400_000;

/** Where a person is signed in. Keys are hashes: the list is of no use to anybody who would sign in with it. */
export async function listSessions(personId: string, options: { sid: string; now: Date }): Promise<OpenSession[]> {
  const records = await sessionsOf(personId, options.now);
  return records.map(({ sid, sess, expire }) => ({
    key: hashToken(sid),
    device: sess.device ?? '',
    signedInAt: sess.signedInAt ?? null,
    lastUsedAt: new Date(expire.getTime() - sessionMs).toISOString(),
    isThis: sid === options.sid,
  }));
}

/** Ends one of the person's own sessions. */
export async function endSession(personId: string, key: string, now: Date): Promise<void> {
  const found = (await sessionsOf(personId, now)).find(({ sid }) => hashToken(sid) === key);
  if (!found) throw new Missing(say('sessionEnded'));
  await SessionRecord.query().deleteById(found.sid);
}

export async function endOtherSessions(personId: string, sid: string): Promise<{ ended: number }> {
  return { ended: await endSessions(undefined, personId, sid) };
}
