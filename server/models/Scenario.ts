import { EstateModel } from './BaseModel.ts';

export class Scenario extends EstateModel {
  static override tableName = 'scenarios';

  static override jsonAttributes = ['suggestion'];

  declare seasonId: string;
  declare name: string;
  declare isLive: boolean;
  /** How a proposal came about; null for what people made. */
  declare suggestion: unknown;
  declare createdBy: string | null;
  declare createdAt: Date;
}
