import type { Role } from '../../shared/catalog/roles.ts';
import { EstateModel } from './BaseModel.ts';

export class Invitation extends EstateModel {
  static override tableName = 'invitations';

  declare email: string;
  declare name: string;
  declare roles: Role[];
  declare accessEndsOn: string | null;
  declare language: string;
  declare tokenHash: string;
  declare expiresAt: Date;
  declare acceptedAt: Date | null;
  declare revokedAt: Date | null;
  declare invitedBy: string;
  declare createdAt: Date;
}
