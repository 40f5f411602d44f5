import { EstateModel } from './BaseModel.ts';

export class WeatherDayRecord extends EstateModel {
  static override tableName = 'weather_days';

  declare day: string;
  declare maxC: number | null;
  declare minC: number | null;
  declare rainMm: number | null;
  declare source: 'typed' | 'imported';
  declare enteredBy: string | null;
  declare enteredAt: Date;
}
