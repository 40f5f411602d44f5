import { Model } from 'objection';

/** The PIN of somebody of the crew in an estate, and how often it was typed wrong in a row. */
export class CrewPin extends Model {
  static override tableName = 'crew_pins';
  static override idColumn = ['estateId', 'personId'];

  declare estateId: string;
  declare personId: string;
  declare pinHash: string;
  declare failures: number;
  declare lockedUntil: Date | null;
  declare setBy: string;
  declare setAt: Date;
}
