import type { Transaction } from 'objection';
import { newLabResult, type LabOutcome, type NewLabResult } from '../../../shared/contracts/lab.ts';
import { storable } from '../../../shared/contracts/storableText.ts';
import { entryValues, type EntryValue } from '../../../shared/lab/entryText.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import { unitsOf } from '../../../shared/lab/units.ts';
import type { Access } from '../../access/access.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import type { Bag } from '../../models/Bag.ts';
import { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Reading } from '../../models/Reading.ts';
import { holdersOf } from '../bags/bagContext.ts';
import { seasonFinder } from '../bags/labels.ts';
import { newestResults } from './newestResults.ts';

interface Context {
  bags: Map<string, Bag>;
  seasonOf: (bag: Bag) => string;
  measures: Map<string, MeasureRecord>;
  known: Map<string, Reading>;
  /** Newest figures of these bags before this batch, by bag and measure. */
  standing: Map<string, Reading[]>;
}

/**
 * Stores figures typed at the bench as provisional results of the bags that carry the labels. Safe to repeat: a figure
 * whose id is known is not stored again. A correction is a figure of its own that names the one before; each item has
 * its own outcome, so that one bad cell never holds back the rest. A figure that somebody else stored in the cell since
 * it was typed refuses it: whoever typed must have seen what they correct or repeat.
 */
export async function recordResults(access: Access, input: { results: unknown[] }, now: Date): Promise<LabOutcome[]> {
  return Reading.transaction(async (trx) => {
    const parsed = input.results.map((raw) => ({ raw, parsed: storable(newLabResult).safeParse(raw) }));
    const context = await loadContext(trx, access, parsed.flatMap((item) => item.parsed.data ?? []));
    const outcomes: LabOutcome[] = [];
    const fresh: Partial<Reading>[] = [];
    for (const { raw, parsed: { data, error } } of parsed) {
      if (!data) {
        outcomes.push({ id: idOf(raw), state: 'refused', reason: error.issues.map((issue) => `${issue.path.join('.')}: ${issue.message}`).join('; ') });
        continue;
      }
      const known = context.known.get(data.id);
      const refusal = known ? (known.valueTyped === data.typed && known.measureCode === data.measureCode ? null : 'A figure with this id is stored with another content. The first stays.') : refusalOf(data, context);
      outcomes.push({ id: data.id, state: refusal === null ? 'received' : 'refused', reason: refusal });
      if (refusal !== null || known || fresh.some(({ id }) => id === data.id)) continue;
      fresh.push(rowOf(access, data, { context, now }));
    }
    if (fresh.length > 0) {
      await Reading.query(trx).insert(fresh);
      const corrections = fresh.filter(({ supersedes }) => supersedes !== null).map(({ id, supersedes, valueTyped, note }) => ({ id, supersedes, to: valueTyped, reason: note }));
      await writeAudit(trx, access, { action: 'lab.enter', subjectType: 'results', subjectId: fresh[0]!.id!, after: { count: fresh.length, corrections } });
    }
    return outcomes;
  });
}

function idOf(raw: unknown): string {
  return typeof raw === 'object' && raw !== null && 'id' in raw && typeof raw.id === 'string' ? raw.id : '';
}

async function loadContext(trx: Transaction, { estateId }: Access, results: readonly NewLabResult[]): Promise<Context> {
  // Two people at one bag must see each other.
  await trx.raw('select pg_advisory_xact_lock(hashtext(?))', [`bags ${estateId}`]);
  const bags = await holdersOf(trx, estateId, results.map(({ code }) => code));
  const seasonOf = await seasonFinder(trx, estateId);
  const measures = await MeasureRecord.query(trx).where({ estateId });
  const known = await Reading.query(trx).where({ estateId }).whereIn('id', results.flatMap(({ id, supersedes }) => (supersedes === null ? [id] : [id, supersedes])));
  const standing = groupBy(await newestResults(estateId, bags.map(({ id }) => id), trx), cellOf);
  return { standing, bags: new Map(bags.map((bag) => [bag.code, bag])), seasonOf, measures: new Map(measures.map((measure) => [measure.code, measure])), known: new Map(known.map((reading) => [reading.id, reading])) };
}

const cellOf = ({ bagId, measureCode }: Pick<Reading, 'bagId' | 'measureCode'>) => `${bagId} ${measureCode}`;

function refusalOf(result: NewLabResult, { bags, measures, known, standing }: Context): string | null {
  if (!bags.has(result.code)) return `No bag carries the label ${result.code}. Take it in on the receiving list first.`;
  const measure = measures.get(result.measureCode);
  if (!measure) return `There is no measure "${result.measureCode}" in this estate.`;
  if (result.unit !== null && !unitsOf(measure.code).some(({ id }) => id === result.unit)) return `${measure.code} is not measured in "${result.unit}" here.`;
  if (valueOf(result) === null) return `"${result.typed}" is not a figure. Type it with point or comma, or "<" and the limit.`;
  if (Number.isNaN(convert(result, valueOf(result)!.value))) return `${result.typed} cannot be in this unit. Check figure and unit.`;
  const { seen } = result;
  const meanwhile = seen === null ? [] : (standing.get(cellOf({ bagId: bags.get(result.code)!.id, measureCode: measure.code })) ?? []).filter(({ id }) => !seen.includes(id));
  if (meanwhile.length > 0)
    return `${result.code}, ${measure.code}: ${meanwhile.map(({ valueTyped, value }) => valueTyped ?? String(value)).join(' / ')} was stored there meanwhile. Look at it, then type ${result.typed} again as a correction or beside it.`;
  if (result.supersedes === null) return null;
  const before = known.get(result.supersedes);
  if (!before || before.measureCode !== result.measureCode) return 'The figure that this one corrects is not known here.';
  return before.state !== 'provisional' && result.reason.length < 3 ? 'The figure before was checked. Say why it changes.' : null;
}

function valueOf({ typed }: NewLabResult): EntryValue | null {
  const entry = entryValues(typed);
  return 'values' in entry && entry.values.length === 1 ? entry.values[0]! : null;
}

function convert({ unit, measureCode }: NewLabResult, value: number): number {
  return unit === null ? value : (unitsOf(measureCode).find(({ id }) => id === unit)?.convert(value) ?? Number.NaN);
}

function rowOf(access: Access, result: NewLabResult, { context, now }: { context: Context; now: Date }): Partial<Reading> {
  const bag = context.bags.get(result.code)!;
  const measure = context.measures.get(result.measureCode)!;
  const { value, below } = valueOf(result)!;
  const own = convert(result, value);
  return {
    id: result.id, estateId: access.estateId, seasonId: context.seasonOf(bag), blockId: bag.blockId, roundId: bag.roundId, bagId: bag.id,
    measureCode: measure.code, value: own, unit: measure.unit, valueTyped: result.typed, unitTyped: unitsOf(measure.code).find(({ id }) => id === result.unit)?.shown ?? measure.unit,
    samples: Math.max(1, bag.vines.length),
    // A result tells of the day on which the fruit was picked.
    takenAt: bag.closedAt ?? bag.receivedAt ?? now, receivedAt: now, personId: access.personId, source: 'lab', state: 'provisional', stateBy: access.personId, stateAt: now,
    supersedes: result.supersedes, instrument: result.instrument, method: result.method, analysedOn: result.analysedOn, note: result.reason,
    flags: [...(below ? ['belowDetection'] : []), ...(own < measure.minimum || own > measure.maximum ? ['odd'] : []), ...(bag.facts.wet === true ? ['wetFruit'] : [])],
  };
}
