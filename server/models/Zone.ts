import type { MultiPolygon } from 'geojson';
import { EstateModel } from './BaseModel.ts';

export class Zone extends EstateModel {
  static override tableName = 'zones';
  static override jsonAttributes = ['statistics'];

  declare zoningId: string;
  declare number: number;
  declare name: string;
  declare colour: string | null;
  declare geometry: MultiPolygon;
  declare areaM2: number;
  declare vineCount: number;
  declare missingCount: number;
  declare statistics: unknown;
}
