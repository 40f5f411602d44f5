import type { WalkEntry } from '../../../shared/field/walkState.ts';
import type { Entry } from '../../offline/fieldDatabase.ts';

/** Stored entries as the walk looks at them. */
export function walkEntries(entries: readonly Entry[]): WalkEntry[] {
  return entries.flatMap(({ id, kind, reading, finding, pick, at, isVoid }): WalkEntry[] => {
    if (isVoid) return [];
    if (kind === 'finding' && finding) return [{ id, kind, targetId: null, measureCode: null, rowId: finding.rowId, ordinal: finding.ordinal, at }];
    if (kind === 'pick' && pick) return [{ id, kind, targetId: pick.targetId, measureCode: null, rowId: pick.rowId, ordinal: pick.ordinal, at }];
    if (reading?.rowId == null || reading.ordinal === null) return [];
    return [{ id, kind, targetId: reading.targetId, measureCode: reading.measureCode, rowId: reading.rowId, ordinal: reading.ordinal, at }];
  });
}
