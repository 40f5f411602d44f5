import type { VineState } from '../../shared/contracts/rows.ts';
import { EstateModel } from './BaseModel.ts';

/** What somebody found in a vine's place, as it was sent; the census keeps only the latest of them. */
export class VineFindingRecord extends EstateModel {
  static override tableName = 'vine_findings';

  declare blockId: string;
  declare rowId: string;
  declare ordinal: number;
  declare state: VineState;
  declare roundId: string | null;
  declare personId: string | null;
  declare typedBy: string | null;
  declare deviceId: string | null;
  declare notedAt: Date;
  declare receivedAt: Date;
}
