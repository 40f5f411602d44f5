import type { RowPiece } from '../../shared/contracts/rows.ts';
import { EstateModel } from './BaseModel.ts';

export class BlockRow extends EstateModel {
  static override tableName = 'block_rows';
  static override jsonAttributes = ['pieces'];

  declare blockId: string;
  declare ordinal: number;
  declare label: string;
  declare labelWas: string | null;
  declare pieces: RowPiece[];
  declare vineCount: number;
  declare retiredAt: Date | null;
}
