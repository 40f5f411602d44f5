import type { EstateSettings } from '../../shared/contracts/estate.ts';
import { BaseModel } from './BaseModel.ts';

export class Estate extends BaseModel {
  static override tableName = 'estates';
  static override jsonAttributes = ['settings'];

  declare name: string;
  declare country: string;
  declare timeZone: string;
  declare units: 'metric' | 'us';
  declare languages: string[];
  declare seasonStartMonth: number;
  declare isDemo: boolean;
  declare settings: EstateSettings;
  declare createdAt: Date;
}
