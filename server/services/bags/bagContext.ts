import type { Transaction } from 'objection';
import type { NewBag } from '../../../shared/contracts/bags.ts';
import { reachOf } from '../../../shared/catalog/permissions.ts';
import { dayIn } from '../../../shared/season/dayIn.ts';
import type { Access } from '../../access/access.ts';
import { plannedVines, type NamedGround } from '../../ground/strangeVine.ts';
import { Bag } from '../../models/Bag.ts';
import { Block } from '../../models/Block.ts';
import { BlockRow } from '../../models/BlockRow.ts';
import { Estate } from '../../models/Estate.ts';
import { Round } from '../../models/Round.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import { Season } from '../../models/Season.ts';

/** Everything of the estate that a batch of bags refers to, loaded in sets. */
export interface BagContext extends NamedGround {
  estateTimeZone: string;
  blocks: Set<string>;
  rows: Map<string, BlockRow>;
  rounds: Set<string>;
  ownRoundsOnly: boolean;
  seasons: Season[];
  /** Bags with these ids, whatever their label. */
  known: Map<string, Bag>;
  /** The bag that holds each label now. */
  byCode: Map<string, Bag>;
}

export async function loadBagContext(trx: Transaction, access: Access, bags: readonly NewBag[]): Promise<BagContext> {
  const { estateId } = access;
  const ownRoundsOnly = reachOf(access.roles, 'readings.record') === 'own';
  // Labels of an estate are given out one batch after the other, so that two phones cannot take one label at the same moment.
  await trx.raw('select pg_advisory_xact_lock(hashtext(?))', [`bags ${estateId}`]);
  const estate = await Estate.query(trx).findById(estateId).throwIfNotFound();
  const blocks = await Block.query(trx).where({ estateId }).whereIn('id', [...new Set(bags.map(({ blockId }) => blockId))]).select('id', 'vineOneEnd');
  const rows = await BlockRow.query(trx).where({ estateId }).whereIn('id', [...new Set(bags.flatMap(({ vines }) => vines.map(({ rowId }) => rowId)))]);
  const roundQuery = Round.query(trx).where({ estateId }).whereIn('id', [...new Set(bags.flatMap(({ roundId }) => roundId ?? []))]).select('id');
  if (ownRoundsOnly) roundQuery.whereIn('id', RoundPerson.query(trx).where({ estateId, personId: access.personId }).select('roundId'));
  const rounds = await roundQuery;
  const seasons = await Season.query(trx).where({ estateId });
  const known = await Bag.query(trx).where({ estateId }).whereIn('id', bags.map(({ id }) => id));
  const holders = await holdersOf(trx, estateId, bags.map(({ code }) => code));
  return {
    estateTimeZone: estate.timeZone,
    blocks: new Set(blocks.map(({ id }) => id)),
    vineOneEnd: new Map(blocks.map((block) => [block.id, block.vineOneEnd])),
    planned: await plannedVines(trx, estateId, rounds.map(({ id }) => id)),
    rows: new Map(rows.map((row) => [row.id, row])),
    rounds: new Set(rounds.map(({ id }) => id)),
    ownRoundsOnly,
    seasons,
    known: new Map(known.map((bag) => [bag.id, bag])),
    byCode: new Map(holders.map((bag) => [bag.code, bag])),
  };
}

/** The bags that hold these labels: a void label is nobody's, and of two bags with one label the first holds it. */
export async function holdersOf(trx: Transaction | undefined, estateId: string, codes: readonly string[]): Promise<Bag[]> {
  return Bag.query(trx).where({ estateId }).whereIn('code', [...new Set(codes)]).whereNull('clashesWith').whereNot({ state: 'void' });
}

/** The season that a moment belongs to, by the estate's own day. */
export function seasonOn(seasons: readonly Season[], isoTime: string, timeZone: string): Season | null {
  const day = dayIn(timeZone, new Date(isoTime));
  return seasons.find(({ startsOn, endsOn }) => startsOn <= day && day <= endsOn) ?? null;
}
