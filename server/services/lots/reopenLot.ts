import type { Transaction } from 'objection';
import type { Access } from '../../access/access.ts';
import { Unusable } from '../../errors.ts';
import { queueMail } from '../../mail/outbox.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Estate } from '../../models/Estate.ts';
import { Lot } from '../../models/Lot.ts';
import { NoticeReader } from '../../models/NoticeReader.ts';
import { Person } from '../../models/Person.ts';
import { PickNotice } from '../../models/PickNotice.ts';
import { lockLot } from './changeLots.ts';
import { fill, withdrawnWords } from './noticeWords.ts';
import { say } from '../../sentences/say.ts';

/** Makes a confirmed lot a draft again, so that its zones can change. Its notice is void from then on, and its readers are told. */
export async function reopenLot(access: Access, lotId: string, version: number, options: { publicUrl: string; now: Date }): Promise<void> {
  await Lot.transaction(async (trx) => {
    const lot = await lockLot(trx, access, lotId, version);
    if (lot.state !== 'confirmed') throw new Unusable('notConfirmed', lot.state === 'picked' ? say('lotWeighed', { lot: lot.name }) : say('lotIsDraft', { lot: lot.name }));
    await lot.$query(trx).patch({ state: 'draft', confirmedBy: null, confirmedAt: null, version: lot.version + 1 });
    const numbers = await withdrawNotices(trx, access, { lot, ...options });
    await writeAudit(trx, access, { action: 'lots.reopen', subjectType: 'lot', subjectId: lotId, subjectName: lot.name, before: { pickOn: lot.pickOn, notices: numbers }, after: { state: 'draft' } });
  });
}

async function withdrawNotices(trx: Transaction, access: Access, { lot, publicUrl, now }: { lot: Lot; publicUrl: string; now: Date }): Promise<number[]> {
  const { estateId } = access;
  const inForce = await PickNotice.query(trx).where({ estateId, lotId: lot.id }).whereNull('voidAt');
  if (inForce.length === 0) return [];
  const estate = await Estate.query(trx).findById(estateId).throwIfNotFound();
  await PickNotice.query(trx).findByIds(inForce.map(({ id }) => id)).patch({ voidAt: now });
  for (const notice of inForce) {
    const readers = await Person.query(trx).whereIn('id', NoticeReader.query(trx).where({ noticeId: notice.id }).select('personId')).whereNotNull('email');
    for (const { email, name, language } of readers) {
      await queueMail(trx, {
        estateId, kind: 'pickNotice', to: { address: email!, name, language },
        facts: { estate: estate.name, number: notice.number, body: fill(withdrawnWords(language), { number: notice.number, lot: lot.name }), link: `${publicUrl}/e/${estateId}/pick-board?notice=${notice.number}` },
      });
    }
  }
  return inForce.map(({ number }) => number);
}
