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
  /** Place in a day over several blocks, and the way from the one before; null for a round sent by itself. */
  declare dayPlace: number | null;
  declare wayS: number | null;
  declare createdBy: string | null;
  declare createdAt: Date;
  declare closedAt: Date | null;
}
