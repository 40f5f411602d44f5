import { EstateModel } from './BaseModel.ts';

export class Round extends EstateModel {
  static override tableName = 'rounds';
  static override jsonAttributes = ['walk'];

  declare planId: string;
  declare blockId: string;
  declare onDate: string;
  declare state: 'sent' | 'open' | 'closed' | 'called off';
  declare gate: string;
  declare notes: string;
  declare walk: unknown;
  declare createdBy: string | null;
  declare createdAt: Date;
  declare closedAt: Date | null;
}
