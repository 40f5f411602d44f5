import { EstateModel } from './BaseModel.ts';

/** One row a person who has a draft open; gone a while after they leave. */
export class ZoningEditor extends EstateModel {
  static override tableName = 'zoning_editors';

  declare zoningId: string;
  declare personId: string;
  declare seenAt: Date;
}
