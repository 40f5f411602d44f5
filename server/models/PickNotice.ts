import { EstateModel } from './BaseModel.ts';

export class PickNotice extends EstateModel {
  static override tableName = 'pick_notices';
  static override jsonAttributes = ['body'];

  /** Null once the lot was deleted: the number on paper still has an answer. */
  declare lotId: string | null;
  declare number: number;
  /** Unguessable: what a code on paper leads to. */
  declare code: string;
  declare replacesNumber: number | null;
  declare voidAt: Date | null;
  declare body: unknown;
  declare sentBy: string;
  declare sentAt: Date;
}
