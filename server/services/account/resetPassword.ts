import type { TransactionOrKnex } from 'objection';
import type { ResetAnswer } from '../../../shared/contracts/account.ts';
import { hashPassword, hashToken, newToken } from '../../access/passwords.ts';
import { Clash, Missing } from '../../errors.ts';
import { PasswordReset } from '../../models/PasswordReset.ts';
import { Person } from '../../models/Person.ts';
import { endSessions } from '../../models/SessionRecord.ts';
import { auditAccount, mailAboutAccount } from './accountMail.ts';
import { say } from '../../sentences/say.ts';

const linkMinutes = 60;
/** More links in an hour are not written: nobody's letter box is filled by somebody else. */
const linksAnHour = 3;

/**
 * Writes a link that sets a new password, where the address belongs to somebody. Says nothing of it: the caller answers
 * everybody alike. Only the hash of the link's secret is stored.
 */
export async function askForReset(email: string, options: { publicUrl: string; allowDemo: boolean; now: Date }): Promise<void> {
  const person = await Person.query().findOne({ email });
  if (!person || (person.isDemo && !options.allowDemo)) return;
  const hourAgo = new Date(options.now.getTime() - 3_600_000);
  await PasswordReset.transaction(async (trx) => {
    await Person.query(trx).findById(person.id).forUpdate();
    if ((await PasswordReset.query(trx).where({ personId: person.id }).where('createdAt', '>', hourAgo).resultSize()) >= linksAnHour) return;
    const token = await writeLink(trx, person.id, options.now);
    await mailAboutAccount(trx, person, { kind: 'reset', facts: { link: `${options.publicUrl}/reset/${token}` } });
    await auditAccount(trx, person, 'account.askReset');
  });
}

/** A link's secret, of which only the hash is stored. */
async function writeLink(trx: TransactionOrKnex, personId: string, now: Date): Promise<string> {
  const { token, tokenHash } = newToken();
  await PasswordReset.query(trx).insert({ personId, tokenHash, expiresAt: new Date(now.getTime() + linkMinutes * 60_000), createdAt: now });
  return token;
}

/**
 * For whoever runs the server and has to let somebody in: the secret of a link that sets a password. It goes to nobody
 * but the caller. The history of the person's estates notes it. Throws when the address is unknown or of the demo.
 */
export async function linkFor(email: string, now: Date): Promise<string> {
  const person = await Person.query().findOne({ email });
  if (!person) throw new Missing(say('unknownEmail', { email }));
  if (person.isDemo) throw new Clash('demoPerson', say('demoPassword'));
  return PasswordReset.transaction(async (trx) => {
    await auditAccount(trx, person, 'account.askReset');
    return writeLink(trx, person.id, now);
  });
}

/** Whose password a link sets, as long as it is good. */
export async function readReset(token: string, now: Date): Promise<{ email: string }> {
  const reset = await openReset(token, now);
  const person = await Person.query().findById(reset.personId).throwIfNotFound();
  return { email: person.email ?? '' };
}

/** Sets the new password with a link, once. All sessions of the person and all their other links end. */
export async function useReset(answer: ResetAnswer, now: Date): Promise<void> {
  const offer = await openReset(answer.token, now);
  const passwordHash = await hashPassword(answer.password);
  await PasswordReset.transaction(async (trx) => {
    const taken = await PasswordReset.query(trx).where({ personId: offer.personId, id: offer.id }).whereNull('usedAt').patch({ usedAt: now });
    if (taken === 0) throw used();
    await PasswordReset.query(trx).where({ personId: offer.personId }).whereNull('usedAt').patch({ usedAt: now });
    const person = await Person.query(trx).findById(offer.personId).throwIfNotFound();
    await Person.query(trx).findById(person.id).patch({ passwordHash });
    await endSessions(trx, person.id);
    await auditAccount(trx, person, 'account.reset');
    if (person.email !== null) await mailAboutAccount(trx, person, { kind: 'passwordChanged', facts: {} });
  });
}

async function openReset(token: string, now: Date): Promise<PasswordReset> {
  const reset = await PasswordReset.query().findOne({ tokenHash: hashToken(token) });
  if (!reset) throw new Missing(say('unknownReset'));
  if (reset.usedAt) throw used();
  if (reset.expiresAt < now) throw new Clash('expiredReset', say('expiredReset'));
  return reset;
}

const used = () => new Clash('usedReset', say('usedReset'));
