import type { Transaction } from 'objection';
import type { BagsMissing } from '../../../shared/contracts/bags.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Missing } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Bag } from '../../models/Bag.ts';
import { Reading } from '../../models/Reading.ts';
import { holdersOf } from './bagContext.ts';
import { say } from '../../sentences/say.ts';

export interface Receipt {
  code: string;
  /** `extra`: nobody has sent what is in it yet; it is kept and waits for that. */
  state: 'here' | 'hereBefore' | 'extra';
}

/** Takes bags in by their labels. Scanning one twice is harmless; a label that nobody has sent is an extra bag, not an error. */
export async function receiveBags(access: Access, codes: readonly string[], now: Date): Promise<Receipt[]> {
  const { estateId, personId } = access;
  return Bag.transaction(async (trx) => {
    await trx.raw('select pg_advisory_xact_lock(hashtext(?))', [`bags ${estateId}`]);
    const wanted = [...new Set(codes)];
    const holders = new Map((await holdersOf(trx, estateId, wanted)).map((bag) => [bag.code, bag]));
    const receipts = wanted.map((code): Receipt => {
      const bag = holders.get(code);
      if (!bag || bag.state === 'printed') return { code, state: 'extra' };
      return { code, state: bag.state === 'received' ? 'hereBefore' : 'here' };
    });
    const fresh = receipts.filter(({ state }) => state !== 'hereBefore').map(({ code }) => code);
    await Bag.query(trx).where({ estateId }).whereIn('id', fresh.flatMap((code) => holders.get(code)?.id ?? [])).patch({ state: 'received', receivedAt: now, receivedBy: personId, missingAt: null, missingBy: null });
    const unknown = fresh.filter((code) => !holders.has(code));
    if (unknown.length > 0) await Bag.query(trx).insert(unknown.map((code) => ({ estateId, code, state: 'received' as const, receivedAt: now, receivedBy: personId })));
    if (fresh.length > 0) await writeAudit(trx, access, { action: 'bags.receive', subjectType: 'bags', subjectId: estateId, subjectName: fresh.join(', ').slice(0, 200), after: { count: fresh.length, codes: fresh } });
    return receipts;
  });
}

/**
 * Says that bags are not here: expected ones that did not come, or ones that were ticked by mistake. With `ifExpected` a bag
 * that somebody took in meanwhile stays where it is. Answers the bags that are missing by this.
 */
export async function reportMissing(access: Access, { bagIds, ifExpected }: BagsMissing, now: Date): Promise<string[]> {
  const { estateId, personId } = access;
  return Bag.transaction(async (trx) => {
    const named = await namedBags(trx, estateId, bagIds);
    const bags = ifExpected ? named.filter(isExpected) : named;
    if (bags.length === 0) return [];
    const ids = bags.map(({ id }) => id);
    const unsent = bags.find(({ closedAt }) => closedAt === null);
    if (unsent) throw new Clash('neverExpected', say('neverExpected', { code: unsent.code }));
    const measured = await Reading.query(trx).where({ estateId, source: 'lab' }).whereIn('bagId', ids).first();
    if (measured) throw new Clash('measured', say('bagHasResults', { code: bags.find(({ id }) => id === measured.bagId)!.code }));
    await Bag.query(trx).where({ estateId }).whereIn('id', ids).patch({ state: 'closed', receivedAt: null, receivedBy: null, missingAt: now, missingBy: personId });
    await writeAudit(trx, access, { action: 'bags.missing', subjectType: 'bags', subjectId: estateId, subjectName: codesOf(bags), after: { count: bags.length } });
    return ids;
  });
}

/** Takes back that bags are missing: they are on their way again. One that was found meanwhile stays here. Answers the bags that are expected by this. */
export async function expectAgain(access: Access, bagIds: readonly string[]): Promise<string[]> {
  const { estateId } = access;
  return Bag.transaction(async (trx) => {
    const bags = (await namedBags(trx, estateId, bagIds)).filter(({ state, missingAt }) => state === 'closed' && missingAt !== null);
    if (bags.length === 0) return [];
    const ids = bags.map(({ id }) => id);
    await Bag.query(trx).where({ estateId }).whereIn('id', ids).patch({ missingAt: null, missingBy: null });
    await writeAudit(trx, access, { action: 'bags.expect', subjectType: 'bags', subjectId: estateId, subjectName: codesOf(bags), after: { count: bags.length } });
    return ids;
  });
}

async function namedBags(trx: Transaction, estateId: string, bagIds: readonly string[]): Promise<Bag[]> {
  const bags = await Bag.query(trx).where({ estateId }).whereIn('id', bagIds).orderBy('code').forUpdate();
  if (bags.length !== new Set(bagIds).size) throw new Missing(say('unknownBags'));
  return bags;
}

const isExpected = ({ state, missingAt, clashesWith }: Bag) => state === 'closed' && missingAt === null && clashesWith === null;
const codesOf = (bags: readonly Bag[]) => bags.map(({ code }) => code).join(', ').slice(0, 200);
