import type { Transaction } from 'objection';
import { newBag, type BagBatchAnswer, type BagOutcome, type NewBag } from '../../../shared/contracts/bags.ts';
import type { Refusal } from '../../../shared/contracts/readings.ts';
import { storable } from '../../../shared/contracts/storableText.ts';
import { spellLabelCode } from '../../../shared/field/labelCode.ts';
import { requireReach, type Access } from '../../access/access.ts';
import { strangeVine } from '../../ground/strangeVine.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Bag } from '../../models/Bag.ts';
import { Person } from '../../models/Person.ts';
import { loadBagContext, seasonOn, type BagContext } from './bagContext.ts';
import { takeLabelOver } from './labels.ts';

/**
 * Stores bags as they were closed in the row. Append-only and safe to repeat: a bag whose id is known is received again,
 * never doubled. A label that is on another bag already is a conflict: the later bag is kept beside the first, without
 * taking its label from it, until somebody settles which is which.
 */
export async function closeBags(access: Access, input: { bags: unknown[] }, now: Date): Promise<BagBatchAnswer> {
  requireReach(access, 'readings.record', 'own');
  return Bag.transaction(async (trx) => {
    const parsed = input.bags.map(parseBag);
    const context = await loadBagContext(trx, access, parsed.flatMap(({ bag }) => bag ?? []));
    const outcomes: BagOutcome[] = [];
    const stored: string[] = [];
    for (const { bag, outcome } of parsed) {
      if (!bag) {
        outcomes.push(outcome);
        continue;
      }
      const answer = repeatOutcome(bag, context) ?? refusalOf(bag, context) ?? (await store(trx, access, { bag, context }));
      if (answer.fresh) stored.push(spellLabelCode(bag.code));
      outcomes.push(answer.outcome);
    }
    if (stored.length > 0) {
      const clashes = outcomes.filter(({ state }) => state === 'conflict').length;
      await writeAudit(trx, access, { action: 'bags.close', subjectType: 'bags', subjectId: outcomes[0]!.id || access.estateId, subjectName: stored.join(', ').slice(0, 200), after: { count: stored.length, clashes } });
    }
    return { outcomes: await withNames(trx, access, outcomes, context), serverTime: now.toISOString() };
  });
}

interface Answer {
  outcome: BagOutcome;
  fresh: boolean;
}

const received = (id: string): BagOutcome => ({ id, state: 'received', reason: null, usedBy: null });
const refused = (id: string, refusal: Refusal): Answer => ({ outcome: { id, state: 'refused', ...refusal, usedBy: null }, fresh: false });

function parseBag(raw: unknown): { bag: NewBag | null; outcome: BagOutcome } {
  const parsed = storable(newBag).safeParse(raw);
  if (parsed.success) return { bag: parsed.data, outcome: received(parsed.data.id) };
  const id = typeof raw === 'object' && raw !== null && 'id' in raw && typeof raw.id === 'string' ? raw.id : '';
  return { bag: null, outcome: { id, state: 'refused', reason: parsed.error.issues.map((issue) => `${issue.path.join('.') || 'bag'}: ${issue.message}`).join('; '), usedBy: null } };
}

/** A bag whose id is known: received again, or refused where the id came back with another label, block or time. */
function repeatOutcome(bag: NewBag, { known }: BagContext): Answer | null {
  const stored = known.get(bag.id);
  if (!stored) return null;
  const same = stored.sentCode === bag.code && stored.blockId === bag.blockId && stored.closedAt?.getTime() === Date.parse(bag.closedAt);
  if (!same) return refused(bag.id, { code: 'otherContent', reason: 'A bag with this id is stored with another label, block or time. The first stays; send the other under an id of its own.' });
  return { outcome: stored.clashesWith === null ? received(bag.id) : clashOutcome(bag.id, stored.clashesWith), fresh: false };
}

function refusalOf(bag: NewBag, context: BagContext): Answer | null {
  if (!context.blocks.has(bag.blockId)) return refused(bag.id, { code: 'blockElsewhere', reason: 'This block is not in this estate.' });
  if (bag.roundId !== null && !context.rounds.has(bag.roundId)) return refused(bag.id, { code: 'notYourRound', reason: 'This round is not one of yours in this estate.' });
  if (bag.roundId === null && context.ownRoundsOnly) return refused(bag.id, { code: 'needsRound', reason: 'Crew close bags within a round that was sent to them.' });
  if (bag.vines.some(({ rowId }) => context.rows.get(rowId)?.blockId !== bag.blockId)) return refused(bag.id, { code: 'rowElsewhere', reason: 'A row of this bag is not a row of the block.' });
  for (const { rowId, ordinal } of bag.vines) {
    const strange = strangeVine(context.rows.get(rowId)!, ordinal, context);
    if (strange !== null) return refused(bag.id, strange);
  }
  if (seasonOn(context.seasons, bag.closedAt, context.estateTimeZone) === null) return refused(bag.id, { code: 'noSeason', reason: `No season of this estate holds ${bag.closedAt.slice(0, 10)}. Check the clock, or make the season first.` });
  return null;
}

async function store(trx: Transaction, access: Access, { bag, context }: { bag: NewBag; context: BagContext }): Promise<Answer> {
  const holder = bag.state === 'void' ? undefined : context.byCode.get(bag.code);
  const isTaken = holder !== undefined && holder.closedAt !== null;
  const { id, code, state, roundId, blockId, zoneId, vines, deviceId, berries, sunSide, shadeSide, wet, rotPercent, note } = bag;
  const row = await Bag.query(trx).insertAndFetch({
    id, estateId: access.estateId, code, sentCode: code, state, roundId, blockId, zoneId, vines, deviceId,
    facts: { berries, sunSide, shadeSide, wet, rotPercent, note },
    closedBy: access.personId, closedAt: new Date(bag.closedAt), deviceTime: bag.deviceTime === null ? null : new Date(bag.deviceTime),
    // A label on the bench or on a printed roll gives way to the bag below; until then the new row must not hold it twice.
    clashesWith: holder?.id ?? null,
  });
  context.known.set(id, row);
  if (isTaken) return { outcome: clashOutcome(id, holder.id), fresh: true };
  if (holder) await takeLabelOver(trx, access, { bag: row, from: holder, seasonId: seasonOn(context.seasons, bag.closedAt, context.estateTimeZone)!.id });
  if (state !== 'void') context.byCode.set(code, row);
  return { outcome: received(id), fresh: true };
}

function clashOutcome(id: string, firstId: string): BagOutcome {
  return { id, state: 'conflict', reason: null, usedBy: { bagId: firstId, rowLabel: null, vineNumber: null, person: null, closedAt: null } };
}

/** Says of each conflict where its label was used first, and by whom as far as the reader may know. */
async function withNames(trx: Transaction, access: Access, outcomes: BagOutcome[], { estateTimeZone, rows }: BagContext): Promise<BagOutcome[]> {
  const ids = [...new Set(outcomes.flatMap(({ usedBy }) => usedBy?.bagId ?? []))];
  if (ids.length === 0) return outcomes;
  const firsts = await Bag.query(trx).where({ estateId: access.estateId }).whereIn('id', ids);
  const people = await Person.query(trx).findByIds(firsts.flatMap(({ closedBy }) => closedBy ?? [])).select('id', 'name');
  const labels = await trx('block_rows').where({ estateId: access.estateId }).whereIn('id', firsts.flatMap(({ vines }) => vines[0]?.rowId ?? [])).select<{ id: string; label: string }[]>('id', 'label');
  const time = new Intl.DateTimeFormat('en-GB', { timeZone: estateTimeZone, hour: '2-digit', minute: '2-digit' });
  return outcomes.map((outcome) => {
    const first = firsts.find(({ id }) => id === outcome.usedBy?.bagId);
    if (!first) return outcome;
    const rowId = first.vines[0]?.rowId;
    const rowLabel = labels.find(({ id }) => id === rowId)?.label ?? rows.get(rowId ?? '')?.label ?? null;
    const person = people.find(({ id }) => id === first.closedBy)?.name ?? null;
    const where = [rowLabel === null ? null : `in row ${rowLabel}`, first.closedAt === null ? null : `at ${time.format(first.closedAt)}`, person === null ? null : `by ${person}`].filter((part) => part !== null).join(' ');
    return { ...outcome, reason: `This label was used already ${where}. Both bags are kept until somebody says which is which.`, usedBy: { bagId: first.id, rowLabel, vineNumber: null, person, closedAt: first.closedAt?.toISOString() ?? null } };
  });
}
