import { EstateModel } from './BaseModel.ts';

export class Phone extends EstateModel {
  static override tableName = 'phones';

  declare deviceId: string;
  declare personId: string;
  declare lastContactAt: Date;
  declare waiting: number;
  declare isReady: boolean | null;
  declare clockOffS: number;
  declare lostAt: Date | null;
  declare lostBy: string | null;
  declare emptiedAt: Date | null;
}
