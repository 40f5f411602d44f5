import { raw, type RawBuilder } from 'objection';
import { EstateModel } from './BaseModel.ts';

/** Vines of a row, from one ordinal to another, that belong to a part of a lot. The database keeps a vine out of two lots of a scenario. */
export class LotRowRun extends EstateModel {
  static override tableName = 'lot_row_runs';

  declare scenarioId: string;
  declare lotPartId: string;
  declare rowId: string;
  declare vines: string;
}

/** Both ends included, as the database's range type. */
export function vineRange(from: number, to: number): RawBuilder {
  return raw("int4range(?, ?, '[]')", from, to);
}
