import { Model } from 'objection';

export class RoundPerson extends Model {
  static override tableName = 'round_people';
  static override idColumn = ['roundId', 'personId'];

  declare estateId: string;
  declare roundId: string;
  declare personId: string;
  declare targetIds: string[] | null;
  declare acknowledgedAt: Date | null;
  declare finishedAt: Date | null;
}
