import type { Transaction } from 'objection';
import type { NewReading, VineFinding } from '../../../shared/contracts/readings.ts';
import { dayIn } from '../../../shared/season/dayIn.ts';
import type { Access } from '../../access/access.ts';
import { plannedVines, type NamedGround } from '../../ground/strangeVine.ts';
import { Bag } from '../../models/Bag.ts';
import { Block } from '../../models/Block.ts';
import { Estate } from '../../models/Estate.ts';
import { BlockRow } from '../../models/BlockRow.ts';
import { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Membership } from '../../models/Membership.ts';
import { Reading } from '../../models/Reading.ts';
import { Round } from '../../models/Round.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import { Season } from '../../models/Season.ts';

/** Everything of the estate that a batch refers to, loaded in sets. */
export interface BatchContext extends NamedGround {
  blocks: Set<string>;
  rows: Map<string, BlockRow>;
  rounds: Set<string>;
  bags: Set<string>;
  measures: Map<string, MeasureRecord>;
  known: Map<string, Reading>;
  /** People whose readings the sender may bring: those who walk the same rounds, also where their access has ended since, and for the office members of the estate. */
  readers: Set<string>;
  ownRoundsOnly: boolean;
  now: Date;
  seasonOn: (isoTime: string) => string | null;
}

export async function loadBatchContext(trx: Transaction, access: Access, batch: { readings: NewReading[]; findings: VineFinding[]; ownRoundsOnly: boolean; now: Date }): Promise<BatchContext> {
  const { readings, findings } = batch;
  const estateId = access.estateId;
  const ids = (pick: (reading: NewReading) => string | null) => [...new Set(readings.map(pick).filter((value) => value !== null))];
  const rowIds = [...new Set([...ids((reading) => reading.rowId), ...findings.map((finding) => finding.rowId)])];
  const roundIds = new Set([...ids((reading) => reading.roundId), ...findings.flatMap(({ roundId }) => (roundId === null ? [] : [roundId]))]);
  const rounds = Round.query(trx).where({ estateId }).whereIn('id', [...roundIds]).select('id');
  if (batch.ownRoundsOnly) rounds.whereIn('id', RoundPerson.query(trx).where({ estateId, personId: access.personId }).select('roundId'));
  // One connection serves a transaction, so these run one after the other; each is one statement for the whole batch.
  const blocks = await Block.query(trx).where({ estateId }).whereIn('id', [...ids((reading) => reading.blockId), ...new Set(findings.map(({ blockId }) => blockId))]).select('id', 'vineOneEnd');
  const rows = await BlockRow.query(trx).where({ estateId }).whereIn('id', rowIds);
  const roundRows = await rounds;
  const planned = await plannedVines(trx, estateId, roundRows.map(({ id }) => id));
  const { timeZone } = await Estate.query(trx).findById(estateId).select('timeZone').throwIfNotFound();
  const bags = await Bag.query(trx).where({ estateId }).whereIn('id', ids((reading) => reading.bagId)).select('id');
  const measures = await MeasureRecord.query(trx).where({ estateId });
  const known = await Reading.query(trx)
    .where({ estateId })
    .whereIn('id', [...readings.map((reading) => reading.id), ...ids((reading) => reading.supersedes)]);
  const readerIds = [...ids(({ readBy }) => readBy), ...findings.flatMap(({ readBy }) => (readBy === null ? [] : [readBy]))];
  const walkers: { personId: string }[] = await RoundPerson.query(trx).where({ estateId }).whereIn('roundId', roundRows.map(({ id }) => id)).whereIn('personId', readerIds).select('personId');
  const members: { personId: string }[] = batch.ownRoundsOnly ? [] : await Membership.query(trx).where({ estateId }).whereIn('personId', readerIds).select('personId');
  const readers = [...walkers, ...members];
  const seasons = await Season.query(trx).where({ estateId });
  return {
    blocks: new Set(blocks.map((block) => block.id)),
    rows: new Map(rows.map((row) => [row.id, row])),
    vineOneEnd: new Map(blocks.map((block) => [block.id, block.vineOneEnd])),
    planned,
    rounds: new Set(roundRows.map((round) => round.id)),
    bags: new Set(bags.map((bag) => bag.id)),
    measures: new Map(measures.map((measure) => [measure.code, measure])),
    known: new Map(known.map((reading) => [reading.id, reading])),
    readers: new Set([access.personId, ...readers.map(({ personId }) => personId)]),
    ownRoundsOnly: batch.ownRoundsOnly,
    now: batch.now,
    seasonOn: (isoTime) => {
      const day = dayIn(timeZone, new Date(isoTime));
      return seasons.find((season) => season.startsOn <= day && day <= season.endsOn)?.id ?? null;
    },
  };
}
