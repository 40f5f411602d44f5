import { BaseModel } from './BaseModel.ts';

export class BackupRecord extends BaseModel {
  static override tableName = 'backups';

  declare kind: 'backup' | 'drill';
  declare ok: boolean;
  declare rowTotal: number;
  declare fileTotal: number;
  declare archivedAt: Date;
  declare at: Date;
}
