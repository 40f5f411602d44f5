import { EstateModel } from './BaseModel.ts';

/** A label that was printed. What is in the bag that carries it is said when the bag is closed. */
export class Label extends EstateModel {
  static override tableName = 'labels';

  declare code: string;
  /** Null, like all that follows, for a blank label of a roll. */
  declare roundId: string | null;
  declare personId: string | null;
  /** The vine it is meant for; null for a bag that takes a whole zone. */
  declare targetId: string | null;
  declare zoneId: string | null;
  /** Number of the stop at which the bag is opened. */
  declare number: number | null;
  declare measureCodes: string[];
  declare printedBy: string | null;
  declare printedAt: Date;
}
