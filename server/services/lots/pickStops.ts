import type { Transaction } from 'objection';
import type { PickStop } from '../../../shared/contracts/lots.ts';
import type { Access } from '../../access/access.ts';
import { Clash } from '../../errors.ts';
import { peopleWhoMay } from '../../ground/peopleWhoMay.ts';
import { Block } from '../../models/Block.ts';
import { EntryRestriction } from '../../models/EntryRestriction.ts';
import { Estate } from '../../models/Estate.ts';
import { LotPart } from '../../models/LotPart.ts';
import { Person } from '../../models/Person.ts';
import { pickDaysAt } from '../../models/PickIntervalChange.ts';
import { say } from '../../sentences/say.ts';

/** A lot on a day, whether that day is its own already or asked for. */
interface DatedLot {
  lotId: string;
  pickOn: string;
}

/**
 * What people entered that rules out picking a lot on its day: a pre-harvest interval that runs longer, or an entry
 * restriction that touches the day in the estate's own time. A restriction of rows stops only lots with vines in them.
 * Entry that was lifted is open; a pre-harvest interval holds whatever became of entry. `at`: as it stood at that moment.
 */
export async function pickStops(estateId: string, lots: readonly DatedLot[], { trx, at = null }: { trx?: Transaction; at?: Date | null } = {}): Promise<Map<string, PickStop[]>> {
  if (lots.length === 0) return new Map();
  const { timeZone } = await Estate.query(trx).findById(estateId).throwIfNotFound();
  const parts = (await LotPart.query(trx)
    .where('lot_parts.estateId', estateId)
    .whereIn('lot_parts.lotId', lots.map(({ lotId }) => lotId))
    .join('lot_row_runs as run', 'run.lotPartId', 'lot_parts.id')
    .distinct('lot_parts.lotId', 'lot_parts.blockId', 'run.rowId')) as unknown as { lotId: string; blockId: string; rowId: string }[];
  const first = lots.map(({ pickOn }) => pickOn).sort()[0]!;
  const query = EntryRestriction.query(trx).where({ estateId }).whereIn('blockId', [...new Set(parts.map(({ blockId }) => blockId))]);
  // A day that was changed since may have been later then.
  if (at === null) query.whereRaw('(no_pick_before > ?::date or (lifted_at is null and (ends_at at time zone ?) > ?::timestamp))', [first, timeZone, first]);
  else query.where('createdAt', '<=', at);
  const entered = (await query
    .orderBy('endsAt', 'desc')
    .select(
      'entry_restrictions.*',
      EntryRestriction.raw('to_char(starts_at at time zone ?, \'YYYY-MM-DD\') as "firstDay"', [timeZone]),
      EntryRestriction.raw("to_char((ends_at at time zone ?) - interval '1 second', 'YYYY-MM-DD') as \"lastDay\"", [timeZone]),
    )) as (EntryRestriction & { firstDay: string; lastDay: string })[];
  const changed = at === null ? new Map<string, string | null>() : await pickDaysAt(estateId, entered.map(({ id }) => id), { at, trx });
  const [blocks, people] = await Promise.all([
    Block.query(trx).findByIds([...new Set(entered.map(({ blockId }) => blockId))]).select('id', 'name'),
    Person.query(trx).findByIds([...new Set(entered.map(({ setBy }) => setBy))]).select('id', 'name'),
  ]);
  const nameOf = (list: readonly { id: string; name: string }[], id: string) => list.find((one) => one.id === id)?.name ?? '';
  return new Map(lots.map(({ lotId, pickOn }) => {
    const own = parts.filter((part) => part.lotId === lotId);
    const touched = entered.filter(({ blockId, rowIds }) => own.some((part) => part.blockId === blockId && (rowIds === null || rowIds.includes(part.rowId))));
    const stops = touched.flatMap((one): PickStop[] => {
      const facts = { restrictionId: one.id, blockName: nameOf(blocks, one.blockId), product: one.product, labelInterval: one.labelInterval, setBy: nameOf(people, one.setBy), setAt: one.createdAt.toISOString() };
      const firstPick = changed.has(one.id) ? changed.get(one.id)! : one.noPickBefore;
      const isTooEarly = firstPick !== null && firstPick > pickOn;
      const isLifted = one.liftedAt !== null && (at === null || one.liftedAt <= at);
      const isClosed = !isLifted && one.firstDay <= pickOn && one.lastDay >= pickOn;
      return [...(isTooEarly ? [{ ...facts, kind: 'pick' as const, until: firstPick }] : []), ...(isClosed ? [{ ...facts, kind: 'entry' as const, until: one.endsAt.toISOString() }] : [])];
    });
    return [lotId, stops];
  }));
}

/** A pick date inside an entry restriction or a pre-harvest interval is stopped, with the entry, who made it and who may lift it. */
export async function requireNoPickStop(trx: Transaction, access: Access, lot: DatedLot): Promise<void> {
  const stop = (await pickStops(access.estateId, [lot], { trx })).get(lot.lotId)?.[0];
  if (!stop) return;
  const { timeZone } = await Estate.query(trx).findById(access.estateId).throwIfNotFound();
  const names = (await peopleWhoMay(trx, access.estateId, 'restrictions.lift')).map(({ name }) => name);
  const facts = { block: stop.blockName, product: stop.product, interval: stop.labelInterval, by: stop.setBy, lifters: { oneOf: names } };
  const sentence = stop.kind === 'pick' ? say('pickTooEarly', { ...facts, until: stop.until }) : say('pickInClosedBlock', { ...facts, until: { moment: new Date(stop.until), timeZone } });
  throw new Clash('restricted', sentence, { stop, mayLift: new Intl.ListFormat('en', { type: 'disjunction' }).format(names) });
}
