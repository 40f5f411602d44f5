import type { BrixMethod } from '../../shared/contracts/lots.ts';
import { EstateModel } from './BaseModel.ts';

export class Lot extends EstateModel {
  static override tableName = 'lots';
  static override jsonAttributes = ['targets', 'factors'];

  declare scenarioId: string;
  declare seasonId: string;
  declare name: string;
  declare wineType: 'red' | 'white' | 'rose';
  declare state: 'draft' | 'confirmed' | 'picked';
  declare pickOn: string | null;
  declare tankId: string | null;
  declare targets: unknown;
  declare factors: unknown;
  /** Who picks, in words. */
  declare crew: string;
  /** Its own way to potential alcohol; null for the estate's. */
  declare alcoholMethod: BrixMethod | null;
  declare version: number;
  declare confirmedBy: string | null;
  declare confirmedAt: Date | null;
  declare createdBy: string | null;
  declare createdAt: Date;
}
