import type { Transaction } from 'objection';
import { loadBlockVines } from '../../ground/blockVines.ts';
import type { Reading } from '../../models/Reading.ts';
import type { ReadingConflict } from '../../models/ReadingConflict.ts';
import { vineWords } from '../plans/viewPlan.ts';

/** What the history calls a conflict by: its block, and the vine where it is about one. Row, number and place are those of the day of the deed. */
export interface ConflictPlace {
  readonly subjectName: string;
  readonly at: { readonly row: string; readonly vine: number; readonly place?: readonly [lon: number, lat: number] | undefined } | null;
}

export async function conflictPlace(trx: Transaction, { kind, estateId }: ReadingConflict, readings: readonly Reading[]): Promise<ConflictPlace> {
  const first = readings.find(({ blockId }) => blockId !== null);
  if (!first) return { subjectName: '', at: null };
  const ground = await loadBlockVines(estateId, first.blockId!, trx);
  const isOfRound = kind === 'oldZones' || kind === 'renumbered';
  if (isOfRound || first.rowId === null || first.ordinal === null) return { subjectName: ground.block.name, at: null };
  const { rowLabel, vineNumber, place } = vineWords(ground, first.rowId, first.ordinal);
  return { subjectName: ground.block.name, at: { row: rowLabel, vine: vineNumber, ...(place ? { place } : {}) } };
}
