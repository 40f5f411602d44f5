import { EstateModel } from './BaseModel.ts';

export class PickNotice extends EstateModel {
  static override tableName = 'pick_notices';
  static override jsonAttributes = ['body'];

  declare lotId: string;
  declare number: number;
  declare replacesNumber: number | null;
  declare voidAt: Date | null;
  declare body: unknown;
  declare sentBy: string;
  declare sentAt: Date;
}
