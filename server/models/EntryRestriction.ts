import { EstateModel } from './BaseModel.ts';

export class EntryRestriction extends EstateModel {
  static override tableName = 'entry_restrictions';

  declare blockId: string;
  declare rowIds: string[] | null;
  declare startsAt: Date;
  declare endsAt: Date;
  declare product: string;
  declare labelInterval: string;
  declare noPickBefore: string | null;
  declare note: string;
  declare setBy: string;
  declare liftedAt: Date | null;
  declare liftedBy: string | null;
  declare liftedReason: string | null;
  declare createdAt: Date;
}
