import { EstateModel } from './BaseModel.ts';

export class CellarResult extends EstateModel {
  static override tableName = 'cellar_results';

  declare lotId: string;
  declare mustL: number | null;
  declare wineL: number | null;
  declare tankBrix: number | null;
  declare leftOutKg: number | null;
  declare note: string;
  declare enteredBy: string;
  declare enteredAt: Date;
}
