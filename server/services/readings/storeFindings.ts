import type { Transaction } from 'objection';
import { reachOf } from '../../../shared/catalog/permissions.ts';
import type { ReadingOutcome, Refusal, VineFinding } from '../../../shared/contracts/readings.ts';
import type { Access } from '../../access/access.ts';
import { writeVines } from '../../models/Vine.ts';
import { VineFindingRecord } from '../../models/VineFindingRecord.ts';
import type { BatchContext } from './batchContext.ts';
import { strangeVine } from '../../ground/strangeVine.ts';

/** Stores findings once each and marks the census with the fresh ones, as proposals where the role may only propose. */
export async function storeFindings(trx: Transaction, access: Access, findings: readonly VineFinding[], context: BatchContext): Promise<ReadingOutcome[]> {
  const proposed = reachOf(access.roles, 'census.edit') !== 'do';
  const known = new Set((await VineFindingRecord.query(trx).where({ estateId: access.estateId }).whereIn('id', findings.map(({ id }) => id)).select('id')).map(({ id }) => id));
  const outcomes: ReadingOutcome[] = [];
  for (const finding of findings) {
    const refusal = known.has(finding.id) ? null : refusalOf(finding, context);
    outcomes.push(refusal === null ? { id: finding.id, state: 'received', reason: null } : { id: finding.id, state: 'refused', ...refusal });
    if (refusal !== null || known.has(finding.id)) continue;
    known.add(finding.id);
    const { readBy, notedAt, ...facts } = finding;
    const personId = readBy ?? access.personId;
    await VineFindingRecord.query(trx).insert({ ...facts, estateId: access.estateId, personId, typedBy: readBy === null ? null : access.personId, notedAt: new Date(notedAt), receivedAt: context.now });
    await writeVines(trx, { estateId: access.estateId, blockId: finding.blockId }, [{ rowId: finding.rowId, ordinal: finding.ordinal, state: finding.state, proposed, notedBy: personId, notedAt: new Date(notedAt) }]);
  }
  return outcomes;
}

function refusalOf(finding: VineFinding, context: BatchContext): Refusal | null {
  const row = context.rows.get(finding.rowId);
  if (row?.blockId !== finding.blockId) return { code: 'rowElsewhere', reason: 'This row is not a row of the block.' };
  if (finding.roundId !== null && !context.rounds.has(finding.roundId)) return { code: 'notYourRound', reason: 'This round is not one of yours in this estate.' };
  if (context.ownRoundsOnly && finding.roundId === null) return { code: 'needsRound', reason: 'Crew record within a round that was sent to them.' };
  if (finding.readBy !== null && !context.readers.has(finding.readBy)) return { code: 'readerUnknown', reason: 'Who found this is not somebody of this estate whose findings you may type.' };
  return strangeVine(row, finding.ordinal, context);
}

/** A proposed mark goes when the person who made it reads the same vine afterwards: the mark was a slip of the thumb. */
export async function takeBackMarks(trx: Transaction, access: Access, readingIds: readonly string[]): Promise<void> {
  await trx.raw(
    `delete from vines v using readings r
     where v.proposed and r.estate_id = ? and r.id = any(?) and v.estate_id = r.estate_id and v.row_id = r.row_id and v.ordinal = r.ordinal
       and v.noted_by = r.person_id and v.noted_at < r.taken_at`,
    [access.estateId, [...readingIds]],
  );
}
