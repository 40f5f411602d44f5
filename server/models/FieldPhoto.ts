import { EstateModel } from './BaseModel.ts';

export class FieldPhoto extends EstateModel {
  static override tableName = 'field_photos';

  declare blockId: string;
  declare roundId: string | null;
  declare rowId: string;
  declare ordinal: number;
  declare fileId: string;
  declare note: string;
  declare personId: string | null;
  declare takenAt: Date;
  declare receivedAt: Date;
}
