import { EstateModel } from './BaseModel.ts';

export class LabMapping extends EstateModel {
  static override tableName = 'lab_mappings';
  static override jsonAttributes = ['mapping'];

  declare labName: string;
  declare mapping: unknown;
  declare updatedAt: Date;
}
