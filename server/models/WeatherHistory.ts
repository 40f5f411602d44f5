import { Model } from 'objection';
import type { WeatherDay } from '../../shared/ripening/weatherTable.ts';
import { WeatherDayRecord } from './WeatherDayRecord.ts';

/** A day's weather as it stood until it was put right or taken out; written by the database. */
export class WeatherHistory extends Model {
  static override tableName = 'weather_history';

  declare id: number;
  declare estateId: string;
  declare day: string;
  declare maxC: number | null;
  declare minC: number | null;
  declare rainMm: number | null;
  declare enteredAt: Date;
  declare until: Date;
}

/** Weather by day as it was known at a moment, oldest first. */
export async function weatherAt(estateId: string, until: Date): Promise<WeatherDay[]> {
  const [standing, gone] = await Promise.all([
    WeatherDayRecord.query().where({ estateId }).where('enteredAt', '<=', until),
    WeatherHistory.query().where({ estateId }).where('enteredAt', '<=', until).where('until', '>', until),
  ]);
  return [...standing, ...gone].map(({ day, maxC, minC, rainMm }) => ({ day, maxC, minC, rainMm })).sort((a, b) => a.day.localeCompare(b.day));
}
