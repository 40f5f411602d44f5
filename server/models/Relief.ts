import { Model, type TransactionOrKnex } from 'objection';

export class Relief extends Model {
  static override tableName = 'reliefs';
  static override idColumn = 'estateId';

  declare estateId: string;
  declare epsg: number;
  declare x0: number;
  declare y0: number;
  declare cellSizeM: number;
  declare cols: number;
  declare rows: number;
  declare cells: Buffer;
  declare updatedAt: Date;
}

/** The newest elevations decide how the land looks. */
export async function keepRelief(trx: TransactionOrKnex, estateId: string, relief: Pick<Relief, 'epsg' | 'x0' | 'y0' | 'cellSizeM' | 'cols' | 'rows' | 'cells'>): Promise<void> {
  await Relief.query(trx).insert({ ...relief, estateId, updatedAt: new Date() }).onConflict('estateId').merge();
}
