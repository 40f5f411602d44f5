import type { Point } from 'geojson';
import { EstateModel } from './BaseModel.ts';

export class Target extends EstateModel {
  static override tableName = 'targets';

  declare planId: string;
  declare zoneId: string;
  declare rowId: string;
  declare ordinal: number;
  declare position: Point;
  declare drawOrder: number;
  declare walkOrder: number | null;
  declare reserveRowId: string | null;
  declare reserveOrdinal: number | null;
  declare measureCodes: string[];
}
