import { EstateModel } from './BaseModel.ts';

export class Layer extends EstateModel {
  static override tableName = 'layers';
  static override jsonAttributes = ['source', 'classes'];

  declare importId: string | null;
  declare derivedFrom: string | null;
  declare type: string;
  declare name: string;
  declare unit: string;
  declare measuredOn: string | null;
  declare source: unknown;
  declare classes: unknown;
  declare retiredAt: Date | null;
  declare createdBy: string | null;
  declare createdAt: Date;
}
