import type { VineState } from '../../shared/contracts/rows.ts';
import { EstateModel } from './BaseModel.ts';

export class Vine extends EstateModel {
  static override tableName = 'vines';

  declare blockId: string;
  declare rowId: string;
  declare ordinal: number;
  declare state: VineState;
  declare proposed: boolean;
  declare notedBy: string | null;
  declare notedAt: Date;
}
