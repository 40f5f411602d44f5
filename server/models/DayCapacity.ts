import { EstateModel } from './BaseModel.ts';

/** What a day can pick and press; the row without a day holds for all others. */
export class DayCapacity extends EstateModel {
  static override tableName = 'day_capacities';

  declare day: string | null;
  declare pickT: number | null;
  declare pressT: number | null;
  declare note: string;
}
