import { EstateModel } from './BaseModel.ts';

export class Tank extends EstateModel {
  static override tableName = 'tanks';

  declare name: string;
  declare litres: number;
  declare workingFill: number;
  declare minimumFill: number;
  declare retiredAt: Date | null;
}
