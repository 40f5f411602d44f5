import { z } from 'zod';
import { id, isoTime } from './common.ts';

/** A deed as it was kept: who, what, on which thing, and the values before and after. */
export const auditLine = z.object({
  id: z.int(),
  who: z.string().nullable().describe('null: done by the application itself'),
  action: z.string(),
  subjectType: z.string(),
  subjectId: z.string().nullable(),
  subjectName: z.string(),
  before: z.unknown(),
  after: z.unknown(),
  reason: z.string().nullable(),
  at: isoTime,
});
export type AuditLine = z.infer<typeof auditLine>;

/** A page, newest first; `next` asks for older ones. */
export const auditPage = z.object({ items: z.array(auditLine), next: z.int().nullable() });
export const auditQuery = z.object({ before: z.coerce.number().int().positive().optional(), subject: id.optional() });

/** A message of the estate as it was written. */
export const mailLine = z.object({
  id,
  kind: z.string(),
  to: z.string(),
  name: z.string(),
  subject: z.string(),
  text: z.string(),
  state: z.enum(['outbox', 'sent', 'failed']),
  error: z.string().nullable(),
  createdAt: isoTime,
  sentAt: isoTime.nullable(),
});
export type MailLine = z.infer<typeof mailLine>;
