import { EstateModel } from './BaseModel.ts';

export class ReadingConflict extends EstateModel {
  static override tableName = 'reading_conflicts';

  declare kind: string;
  declare readingIds: string[];
  declare state: 'open' | 'settled';
  declare choice: 'keepOne' | 'repeat' | 'bothReal' | null;
  declare keptReadingId: string | null;
  declare settledBy: string | null;
  declare settledAt: Date | null;
  declare createdAt: Date;
}
