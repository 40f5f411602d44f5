import type { LabAnswers } from '../../shared/lab/file/labFile.ts';
import { EstateModel } from './BaseModel.ts';

/** How a laboratory's files are read: the answers given once, and the columns by which its files are known again. */
export class LabMapping extends EstateModel {
  static override tableName = 'lab_mappings';
  static override jsonAttributes = ['mapping'];

  declare labName: string;
  declare mapping: { signature: string; answers: LabAnswers };
  declare updatedAt: Date;
}
