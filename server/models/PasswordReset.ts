import { BaseModel } from './BaseModel.ts';

export class PasswordReset extends BaseModel {
  static override tableName = 'password_resets';

  declare personId: string;
  declare tokenHash: string;
  declare expiresAt: Date;
  declare usedAt: Date | null;
  declare createdAt: Date;
}
