import { Model } from 'objection';

/** One state of a row of lots, their vines, tanks, what-ifs or factors; written by the database at every change. */
export class LotHistory extends Model {
  static override tableName = 'lot_history';
  static override jsonAttributes = ['body'];

  declare id: number;
  declare estateId: string;
  declare subject: string;
  declare rowId: string;
  declare at: Date;
  /** The row was deleted then. */
  declare gone: boolean;
  declare body: Record<string, unknown>;
}
