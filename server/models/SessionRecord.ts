import { Model, type TransactionOrKnex } from 'objection';

/** What a session holds beside the library's own fields. */
export interface SessionFacts {
  passport?: { user?: string };
  /** The browser as it named itself at sign-in. */
  device?: string;
  signedInAt?: string;
}

/** A row of the session store: whoever holds its id is signed in, so the id itself never leaves the server. */
export class SessionRecord extends Model {
  static override tableName = 'sessions';
  static override idColumn = 'sid';

  declare sid: string;
  declare sess: SessionFacts;
  declare expire: Date;
}

const ofPerson = (trx: TransactionOrKnex | undefined, personId: string) => SessionRecord.query(trx).whereRaw("sess -> 'passport' ->> 'user' = ?", [personId]);

/** Sessions of a person that have not run out, the latest used first. */
export async function sessionsOf(personId: string, now: Date): Promise<SessionRecord[]> {
  return ofPerson(undefined, personId).where('expire', '>', now).orderBy('expire', 'desc');
}

/** Signs a person out everywhere, but for the session named. Resolves with the number ended. */
export async function endSessions(trx: TransactionOrKnex | undefined, personId: string, except: string | null = null): Promise<number> {
  return ofPerson(trx, personId).where((query) => except !== null && query.whereNot('sid', except)).delete();
}
