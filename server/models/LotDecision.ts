import { EstateModel } from './BaseModel.ts';

/** What the board showed when a lot was confirmed or its notice sent: kept as it was, whatever is learned later. */
export class LotDecision extends EstateModel {
  static override tableName = 'lot_decisions';
  static override jsonAttributes = ['body'];

  declare lotId: string;
  declare kind: 'confirm' | 'notice';
  declare body: unknown;
  declare decidedBy: string;
  declare decidedAt: Date;
}
