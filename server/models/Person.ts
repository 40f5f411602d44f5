import { BaseModel } from './BaseModel.ts';

export class Person extends BaseModel {
  static override tableName = 'people';

  declare name: string;
  declare email: string | null;
  declare passwordHash: string | null;
  declare pinHash: string | null;
  declare language: string;
  declare units: 'metric' | 'us';
  declare theme: string;
  declare isDemo: boolean;
  declare createdAt: Date;
}
