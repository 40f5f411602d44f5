import type { Refusal } from '../../../shared/contracts/readings.ts';
import type { BlockRow } from '../../models/BlockRow.ts';
import type { BatchContext } from './batchContext.ts';

/**
 * Refuses a vine that its row does not have, naming the row and its last vine; null where it has it. A vine that a round
 * was sent for is always one: whoever stood at it may have had the row as it was before. A row that is no longer there, or
 * whose vines nobody has counted, tells nothing.
 */
export function strangeVine(row: BlockRow, ordinal: number, { planned, vineOneEnd }: Pick<BatchContext, 'planned' | 'vineOneEnd'>): Refusal | null {
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

export const plannedKey = (rowId: string, ordinal: number) => `${rowId} ${ordinal}`;
