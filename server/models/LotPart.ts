import { EstateModel } from './BaseModel.ts';

export class LotPart extends EstateModel {
  static override tableName = 'lot_parts';

  declare lotId: string;
  declare blockId: string;
  declare zoneId: string | null;
  declare zoneNumber: number;
  declare zoneName: string;
}
