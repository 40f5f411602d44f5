import type { MultiPolygon, Point } from 'geojson';
import type { PostColour } from '../../shared/contracts/blocks.ts';
import { EstateModel } from './BaseModel.ts';

export class Block extends EstateModel {
  static override tableName = 'blocks';

  declare name: string;
  declare variety: string;
  declare rootstock: string;
  declare plantedYear: number | null;
  declare boundary: MultiPolygon;
  declare areaM2: number;
  declare bookAreaHa: number | null;
  declare epsg: number;
  /** The rows are lines that only number places: vines are found by coordinates. */
  declare withoutRows: boolean;
  declare rowBearingDeg: number;
  declare rowSpacingM: number;
  declare vineSpacingM: number;
  declare rowCount: number | null;
  declare headlandM: number;
  declare rowOneSide: 'low' | 'high';
  declare vineOneEnd: 'start' | 'end';
  declare firstRowLabel: number;
  declare startPostColour: PostColour;
  declare endPostColour: PostColour;
  declare gate: Point | null;
  declare cellSizeM: number;
  declare gridKey: string;
  declare trellis: string;
  declare notes: string;
  declare census: 'unknown' | 'partial' | 'full';
  declare censusAt: Date | null;
  /** Since when every change of a mark is kept; null when none was made before that. */
  declare censusKeptSince: Date | null;
  declare version: number;
  declare retiredAt: Date | null;
  declare createdAt: Date;
}
