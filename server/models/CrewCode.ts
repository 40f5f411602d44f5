import { EstateModel } from './BaseModel.ts';

export class CrewCode extends EstateModel {
  static override tableName = 'crew_codes';

  declare codeHash: string;
  declare expiresAt: Date;
  declare endedAt: Date | null;
  declare madeBy: string;
  declare madeAt: Date;
}
