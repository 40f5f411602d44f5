import type { Access } from '../access/access.ts';
import { AuditEntry } from '../models/AuditEntry.ts';
import { MailMessage } from '../models/MailMessage.ts';
import { Person } from '../models/Person.ts';

const pageSize = 50;

/** Audit entries, newest first, in pages by key; `subject` keeps those about one thing. */
export async function listAudit(access: Access, { before, subject }: { before: number | null; subject: string | null }) {
  const query = AuditEntry.query().where({ estateId: access.estateId }).orderBy('id', 'desc').limit(pageSize);
  if (before !== null) query.where('id', '<', before);
  if (subject !== null) query.where({ subjectId: subject });
  const entries = await query;
  const people = await Person.query().findByIds([...new Set(entries.map((entry) => entry.personId).filter((id) => id !== null))]);
  return {
    items: entries.map((entry) => ({
      id: entry.id,
      who: people.find((person) => person.id === entry.personId)?.name ?? null,
      action: entry.action,
      subjectType: entry.subjectType,
      subjectId: entry.subjectId,
      subjectName: entry.subjectName,
      before: entry.before,
      after: entry.after,
      reason: entry.reason,
      at: entry.at.toISOString(),
    })),
    next: entries.length === pageSize ? entries.at(-1)!.id : null,
  };
}

/** A link that sets a password is for its reader alone; it is shown only where nothing but this outbox can deliver it. */
const isDelivered = ({ kind, state }: MailMessage) => kind === 'reset' && state !== 'outbox';

/** Messages of the estate as they were written, newest first: the local outbox. */
export async function listMail(access: Access) {
  const messages = await MailMessage.query().where({ estateId: access.estateId }).orderBy('createdAt', 'desc').limit(200);
  return {
    items: messages.map((message) => ({
      id: message.id,
      kind: message.kind,
      to: message.toAddress,
      name: message.toName,
      subject: message.subject,
      text: isDelivered(message) ? message.bodyText.replace(/https?:\/\/\S+/, '…') : message.bodyText,
      state: message.state,
      error: message.error,
      createdAt: message.createdAt.toISOString(),
      sentAt: message.sentAt?.toISOString() ?? null,
    })),
    total: messages.length,
  };
}
