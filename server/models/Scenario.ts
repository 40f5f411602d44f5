import { EstateModel } from './BaseModel.ts';

export class Scenario extends EstateModel {
  static override tableName = 'scenarios';

  declare seasonId: string;
  declare name: string;
  declare isLive: boolean;
  declare createdBy: string | null;
  declare createdAt: Date;
}
