import { EstateModel } from './BaseModel.ts';

export class Season extends EstateModel {
  static override tableName = 'seasons';
  static override jsonAttributes = ['phases'];

  declare name: string;
  declare startsOn: string;
  declare endsOn: string;
  declare phases: Record<string, [string, string]>;
  declare closedAt: Date | null;
}
