import type { MultiPolygon, Point } from 'geojson';
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
  declare rowBearingDeg: number;
  declare rowSpacingM: number;
  declare vineSpacingM: number;
  declare headlandM: number;
  declare rowOneSide: 'low' | 'high';
  declare vineOneEnd: 'start' | 'end';
  declare startPostColour: string;
  declare endPostColour: string;
  declare gate: Point | null;
  declare cellSizeM: number;
  declare trellis: string;
  declare notes: string;
  declare version: number;
  declare retiredAt: Date | null;
  declare createdAt: Date;
}
