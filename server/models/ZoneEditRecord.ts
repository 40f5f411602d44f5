import { EstateModel } from './BaseModel.ts';

export class ZoneEditRecord extends EstateModel {
  static override tableName = 'zone_edits';
  static override jsonAttributes = ['operation'];

  declare zoningId: string;
  declare sequence: number;
  declare operation: unknown;
  declare reason: string;
  declare undone: boolean;
  declare authorId: string | null;
  declare at: Date;
}
