import { Model, type TransactionOrKnex } from 'objection';

export class AuditEntry extends Model {
  static override tableName = 'audit_entries';
  static override jsonAttributes = ['before', 'after'];

  declare id: number;
  declare estateId: string;
  declare personId: string | null;
  declare action: string;
  declare subjectType: string;
  declare subjectId: string;
  declare subjectName: string;
  declare before: unknown;
  declare after: unknown;
  declare reason: string | null;
  declare at: Date;
}

export interface AuditFacts {
  action: string;
  subjectType: string;
  subjectId: string;
  subjectName?: string;
  before?: unknown;
  after?: unknown;
  reason?: string | null;
}

/** Writes who did what, in the transaction of the deed itself: no deed without its entry. */
export async function writeAudit(trx: TransactionOrKnex, who: { estateId: string; personId: string | null }, facts: AuditFacts): Promise<void> {
  await AuditEntry.query(trx).insert({ estateId: who.estateId, personId: who.personId, ...facts });
}
