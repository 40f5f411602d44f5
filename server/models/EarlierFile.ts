import type { EarlierSummary } from '../../shared/contracts/earlier.ts';
import type { LabAnswers } from '../../shared/lab/file/labFile.ts';
import { EstateModel } from './BaseModel.ts';

/** A table of readings of earlier visits; the original itself is a stored file. */
export class EarlierFile extends EstateModel {
  static override tableName = 'earlier_files';
  static override jsonAttributes = ['answers', 'summary'];

  declare fileId: string;
  declare fileName: string;
  declare state: 'asks' | 'stored' | 'dismissed' | 'takenBack';
  declare answers: LabAnswers;
  /** Some answers were taken over from the last table with the same columns. */
  declare remembered: boolean;
  declare signature: string;
  /** What was stored of it. */
  declare summary: EarlierSummary | null;
  declare sentBy: string | null;
  declare sentAt: Date;
  declare storedBy: string | null;
  declare storedAt: Date | null;
  declare takenBackBy: string | null;
  declare takenBackAt: Date | null;
  declare takenBackReason: string | null;
}
