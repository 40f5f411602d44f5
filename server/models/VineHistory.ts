import { Model } from 'objection';
import type { Vine } from './Vine.ts';

/** One state of a mark of the vine census; written by the database at every change. */
export class VineHistory extends Model {
  static override tableName = 'vine_history';

  declare id: number;
  declare estateId: string;
  declare blockId: string;
  declare rowId: string;
  declare ordinal: number;
  /** Null when the mark was taken away. */
  declare state: Vine['state'] | null;
  declare proposed: boolean;
  declare at: Date;
}

/** Marks of a block that stood at a moment; what was only proposed then is left out. */
export async function marksAt(estateId: string, blockId: string, until: Date): Promise<Pick<Vine, 'rowId' | 'ordinal' | 'state'>[]> {
  const newest = await VineHistory.query()
    .where({ estateId, blockId })
    .where('at', '<=', until)
    .distinctOn('rowId', 'ordinal')
    .orderBy(['rowId', 'ordinal', { column: 'id', order: 'desc' }]);
  return newest.flatMap(({ rowId, ordinal, state, proposed }) => (state === null || proposed ? [] : [{ rowId, ordinal, state }]));
}
