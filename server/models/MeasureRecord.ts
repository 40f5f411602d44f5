import type { RowSide } from '../../shared/catalog/measures.ts';
import { EstateModel } from './BaseModel.ts';

export class MeasureRecord extends EstateModel {
  static override tableName = 'measures';

  declare code: string;
  declare name: string;
  declare unit: string;
  declare decimals: number;
  declare minimum: number;
  declare maximum: number;
  declare marginKind: 'absolute' | 'relative';
  declare margin: number;
  declare confidence: number;
  declare sampledUnit: string;
  declare spreadKind: 'sd' | 'cv';
  declare spreadValue: number;
  declare spreadSource: string;
  declare typicalMean: number;
  declare secondsPerSample: number;
  declare weighting: 'vines' | 'mass';
  declare skewed: boolean;
  declare measuredIn: 'field' | 'lab';
  declare rowSide: RowSide;
  declare inUse: boolean;
}
