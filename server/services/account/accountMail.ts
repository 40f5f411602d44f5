import type { TransactionOrKnex } from 'objection';
import type { MailKind } from '../../mail/templates.ts';
import { queueMail } from '../../mail/outbox.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Membership } from '../../models/Membership.ts';
import type { Person } from '../../models/Person.ts';

/** Estates where a person has access, with the roles held there. */
async function openPlaces(trx: TransactionOrKnex, personId: string): Promise<Membership[]> {
  return Membership.query(trx).where({ personId }).whereNull('endedAt').whereRaw('starts_on <= current_date and (ends_on is null or ends_on >= current_date)');
}

/**
 * Writes to a person about their account. The outbox of an estate shows the message only where that gives nobody more
 * than they have: the person belongs to this one estate and does not run it (people of the demo are nobody's secret).
 * Other account mail belongs to no estate, so that an admin of one cannot take over an account that reaches further.
 */
export async function mailAboutAccount(trx: TransactionOrKnex, person: Person, message: { kind: MailKind; facts: Record<string, string | number> }): Promise<void> {
  const places = await openPlaces(trx, person.id);
  const estates = new Set(places.map((place) => place.estateId));
  const runsIt = places.some(({ role }) => role === 'owner' || role === 'admin');
  const estateId = estates.size === 1 && (person.isDemo || !runsIt) ? places[0]!.estateId : null;
  await queueMail(trx, { estateId, kind: message.kind, to: { address: person.email!, name: person.name, language: person.language }, facts: message.facts });
}

/** Notes a deed about an account in the books of every estate the person works in. */
export async function auditAccount(trx: TransactionOrKnex, person: Person, action: string): Promise<void> {
  const estates = new Set((await openPlaces(trx, person.id)).map((place) => place.estateId));
  for (const estateId of estates) await writeAudit(trx, { estateId, personId: person.id }, { action, subjectType: 'person', subjectId: person.id, subjectName: person.name });
}
