import type { Role } from '../../shared/catalog/roles.ts';
import { EstateModel } from './BaseModel.ts';

export class Membership extends EstateModel {
  static override tableName = 'memberships';

  declare personId: string;
  declare role: Role;
  declare startsOn: string;
  declare endsOn: string | null;
  declare endedAt: Date | null;
  declare createdAt: Date;
}
