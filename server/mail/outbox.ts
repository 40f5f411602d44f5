import type { TransactionOrKnex } from 'objection';
import { MailMessage } from '../models/MailMessage.ts';
import { composeMail, type MailKind } from './templates.ts';

export interface MailRequest {
  estateId: string | null;
  kind: MailKind;
  to: { address: string; name: string; language: string };
  facts: Record<string, string | number>;
}

/** Puts a message in the outbox within the transaction of its cause; the transport takes it from there. */
export async function queueMail(trx: TransactionOrKnex, request: MailRequest): Promise<void> {
  const { subject, text } = composeMail(request.kind, request.to.language, { name: request.to.name, ...request.facts });
  await MailMessage.query(trx).insert({
    estateId: request.estateId,
    kind: request.kind,
    toAddress: request.to.address,
    toName: request.to.name,
    language: request.to.language,
    subject,
    bodyText: text,
  });
}
