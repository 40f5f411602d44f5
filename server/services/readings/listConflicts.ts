import { reachOf } from '../../../shared/catalog/permissions.ts';
import type { ConflictCard, ConflictList } from '../../../shared/contracts/conflicts.ts';
import type { Access } from '../../access/access.ts';
import { loadBlockVines, type BlockVines } from '../../ground/blockVines.ts';
import { Person } from '../../models/Person.ts';
import type { Reading } from '../../models/Reading.ts';
import { ReadingConflict } from '../../models/ReadingConflict.ts';
import { Round } from '../../models/Round.ts';
import { bagClashes, settledClashes } from '../bags/bagClashes.ts';
import { vineWords } from '../plans/viewPlan.ts';
import { inOrderOfTaking, newestReadings } from './newestReadings.ts';
import { nameFor } from './readerName.ts';

const most = 200;
/** A card of a whole round shows its first readings; the answer holds for all. */
const shownReadings = 40;

/** Conflicts as cards, open ones first, and labels that are on two bags. Who may not settle for others sees the cards that hold a reading of their own. */
export async function listConflicts(access: Access): Promise<ConflictList> {
  const { estateId } = access;
  const query = ReadingConflict.query().where({ estateId }).orderByRaw("state = 'settled'").orderBy('createdAt', 'desc').limit(most);
  if (!settlesAll(access)) query.whereRaw('reading_ids && array(select id from readings where estate_id = ? and person_id = ?)', [estateId, access.personId]);
  const conflicts = await query;
  const chains = await newestReadings(estateId, conflicts.flatMap(({ readingIds }) => readingIds));
  const readings = inOrderOfTaking(chains.values()).filter(isOnVine);
  const [people, rounds] = await Promise.all([
    Person.query().findByIds([...new Set([...readings.flatMap(({ personId, typedBy }) => [personId, typedBy]), ...conflicts.map(({ settledBy }) => settledBy)].filter((id) => id !== null))]).select('id', 'name'),
    Round.query().where({ estateId }).findByIds([...new Set(readings.flatMap(({ roundId }) => (roundId === null ? [] : [roundId])))]).select('id', 'onDate'),
  ]);
  const grounds = new Map<string, BlockVines>();
  for (const blockId of new Set(readings.map((reading) => reading.blockId))) grounds.set(blockId, await loadBlockVines(estateId, blockId));
  const items = conflicts.map((conflict) => cardOf(conflict, { access, grounds, people, rounds, readings: inOrderOfTaking(conflict.readingIds.map((id) => chains.get(id) ?? [])).filter(isOnVine) }));
  const [bags, settledBags] = [await bagClashes(access), await settledClashes(access)];
  return { items, bags, settledBags, total: items.length + bags.length + settledBags.length, open: items.filter(({ state }) => state === 'open').length + bags.length };
}

export function settlesAll(access: Access): boolean {
  return reachOf(access.roles, 'conflicts.settle') === 'do';
}

/** Cards of readings are about vines; a label on two bags is a card of its own. */
type VineReading = Reading & { blockId: string };
const isOnVine = (reading: Reading): reading is VineReading => reading.blockId !== null;

interface CardFacts {
  access: Access;
  grounds: ReadonlyMap<string, BlockVines>;
  people: readonly Person[];
  rounds: readonly Round[];
  readings: readonly VineReading[];
}

function cardOf(conflict: ReadingConflict, { access, grounds, people, rounds, readings }: CardFacts): ConflictCard {
  const first = readings[0];
  const mayAnswer = settlesAll(access) || readings.every(({ personId }) => personId === access.personId);
  return {
    id: conflict.id,
    kind: conflict.kind,
    state: conflict.state,
    blockName: first ? (grounds.get(first.blockId)?.block.name ?? '') : '',
    roundDate: rounds.find(({ id }) => id === first?.roundId)?.onDate ?? null,
    readings: readings.slice(0, shownReadings).map((reading) => readingOf(reading, { access, people, ground: grounds.get(reading.blockId)! })),
    readingIds: readings.map(({ id }) => id),
    choice: conflict.choice,
    keptReadingId: conflict.keptReadingId,
    settledBy: people.find(({ id }) => id === conflict.settledBy)?.name ?? null,
    settledAt: conflict.settledAt?.toISOString() ?? null,
    createdAt: conflict.createdAt.toISOString(),
    maySettle: conflict.state === 'open' && mayAnswer,
    mayReopen: conflict.state === 'settled' && mayAnswer,
  };
}

function readingOf(reading: VineReading, { access, people, ground }: { access: Access; people: readonly Person[]; ground: BlockVines }): ConflictCard['readings'][number] {
  const { rowLabel, vineNumber, place } = vineWords(ground, reading.rowId ?? '', reading.ordinal ?? 0);
  const flags = reading.flags as string[];
  const isRenamed = !place && reading.seenAs !== null && (reading.seenAs.row !== rowLabel || reading.seenAs.vine !== vineNumber);
  return {
    id: reading.id,
    who: nameFor(access, people, reading.personId),
    typedBy: nameFor(access, people, reading.typedBy),
    isMine: reading.personId === access.personId,
    source: reading.source,
    takenAt: reading.takenAt.toISOString(),
    receivedAt: reading.receivedAt.toISOString(),
    wrongClock: flags.includes('clock') ? (reading.deviceTime?.toISOString() ?? null) : null,
    measureCode: reading.measureCode,
    value: reading.value,
    unit: reading.unit,
    rowLabel,
    vine: vineNumber,
    ...(place ? { place } : {}),
    seenAs: isRenamed ? reading.seenAs : null,
    isReserve: flags.includes('reserve'),
    note: reading.note,
    isLeftOut: reading.excludedReason !== null,
    isCorrected: reading.supersedes !== null,
  };
}
