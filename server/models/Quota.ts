import { EstateModel } from './BaseModel.ts';

export class Quota extends EstateModel {
  static override tableName = 'quotas';
  static override jsonAttributes = ['spread'];

  declare planId: string;
  declare zoneId: string;
  declare measureCode: string;
  declare samples: number;
  declare drives: boolean;
  declare spread: unknown;
}
