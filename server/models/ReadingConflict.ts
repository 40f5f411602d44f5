import type { ConflictAnswer, ConflictKind } from '../../shared/contracts/conflicts.ts';
import { EstateModel } from './BaseModel.ts';

export class ReadingConflict extends EstateModel {
  static override tableName = 'reading_conflicts';

  declare kind: ConflictKind;
  declare readingIds: string[];
  declare blockId: string | null;
  declare roundId: string | null;
  declare state: 'open' | 'settled';
  declare choice: ConflictAnswer | null;
  declare keptReadingId: string | null;
  declare settledBy: string | null;
  declare settledAt: Date | null;
  declare createdAt: Date;
}
