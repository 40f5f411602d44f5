import type { LabAnswers } from '../../shared/lab/file/labFile.ts';
import { EstateModel } from './BaseModel.ts';

/** A laboratory's file on its way to results; the original itself is a stored file. */
export class LabFile extends EstateModel {
  static override tableName = 'lab_files';
  static override jsonAttributes = ['answers'];

  declare fileId: string;
  declare fileName: string;
  declare labName: string;
  declare state: 'asks' | 'stored' | 'dismissed';
  declare answers: LabAnswers;
  declare sentBy: string | null;
  declare sentAt: Date;
  declare storedBy: string | null;
  declare storedAt: Date | null;
  declare storedCount: number | null;
}
