import type { PasswordChange } from '../../../shared/contracts/account.ts';
import { hashPassword, passwordMatches } from '../../access/passwords.ts';
import { Unusable } from '../../errors.ts';
import { PasswordReset } from '../../models/PasswordReset.ts';
import { Person } from '../../models/Person.ts';
import { endSessions } from '../../models/SessionRecord.ts';
import { auditAccount, mailAboutAccount } from './accountMail.ts';
import { say } from '../../sentences/say.ts';

/** Sets a new password for somebody who knows the old one; every other session of theirs ends, and they are told by mail. */
export async function changePassword(personId: string, change: PasswordChange, options: { sid: string; now: Date }): Promise<{ ended: number }> {
  const person = await Person.query().findById(personId).throwIfNotFound();
  if (!(await passwordMatches(person.passwordHash, change.currentPassword))) throw new Unusable('wrongPassword', say('wrongPasswordNow'));
  const passwordHash = await hashPassword(change.password);
  return Person.transaction(async (trx) => {
    await Person.query(trx).findById(personId).patch({ passwordHash });
    await PasswordReset.query(trx).where({ personId }).whereNull('usedAt').patch({ usedAt: options.now });
    await auditAccount(trx, person, 'account.password');
    if (person.email !== null) await mailAboutAccount(trx, person, { kind: 'passwordChanged', facts: {} });
    return { ended: await endSessions(trx, personId, options.sid) };
  });
}
