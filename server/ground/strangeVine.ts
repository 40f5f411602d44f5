import type { Transaction } from 'objection';
import type { Refusal } from '../../shared/contracts/readings.ts';
import type { BlockRow } from '../models/BlockRow.ts';
import { Round } from '../models/Round.ts';
import { Target } from '../models/Target.ts';

/** What is known of the blocks and rounds that vines are named in. */
export interface NamedGround {
  /** By block: the end at which vine 1 stands. */
  readonly vineOneEnd: ReadonlyMap<string, 'start' | 'end'>;
  /** Vines that the rounds were sent for, targets and reserves. */
  readonly planned: ReadonlySet<string>;
}

/**
 * Refuses a vine that its row does not have, naming the row and its last vine; null where it has it. A vine that a round
 * was sent for is always one: whoever stood at it may have had the row as it was before. A row that is no longer there, or
 * whose vines nobody has counted, tells nothing.
 */
export function strangeVine(row: BlockRow, ordinal: number, { planned, vineOneEnd }: NamedGround): Refusal | null {
  const first = row.pieces[0]?.firstVine;
  if (row.vineCount === 0 || first === undefined || row.retiredAt !== null || planned.has(plannedKey(row.id, ordinal))) return null;
  const place = ordinal - first + 1;
  if (place >= 1 && place <= row.vineCount) return null;
  const vine = vineOneEnd.get(row.blockId) === 'end' ? row.vineCount + 1 - place : place;
  return {
    code: 'noSuchVine', reason: `Row ${row.label} has vines 1 to ${row.vineCount}; there is no vine ${vine}. Look at the row again.`,
    facts: { row: row.label, first: 1, last: row.vineCount, vine },
  };
}

const plannedKey = (rowId: string, ordinal: number) => `${rowId} ${ordinal}`;

/** The vines that these rounds of an estate were sent for, targets and reserves. */
export async function plannedVines(trx: Transaction | undefined, estateId: string, roundIds: readonly string[]): Promise<Set<string>> {
  if (roundIds.length === 0) return new Set();
  const targets = await Target.query(trx).where({ estateId }).whereIn('planId', Round.query(trx).where({ estateId }).whereIn('id', [...roundIds]).select('planId')).select('rowId', 'ordinal', 'reserveRowId', 'reserveOrdinal');
  return new Set(targets.flatMap(({ rowId, ordinal, reserveRowId, reserveOrdinal }) => [plannedKey(rowId, ordinal), ...(reserveRowId === null || reserveOrdinal === null ? [] : [plannedKey(reserveRowId, reserveOrdinal)])]));
}
