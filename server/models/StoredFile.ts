import { EstateModel } from './BaseModel.ts';

export class StoredFile extends EstateModel {
  static override tableName = 'files';

  declare sha256: string;
  declare bytes: number;
  declare originalName: string;
  declare uploadedBy: string | null;
  declare createdAt: Date;
}
