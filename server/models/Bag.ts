import { EstateModel } from './BaseModel.ts';

export class Bag extends EstateModel {
  static override tableName = 'bags';
  static override jsonAttributes = ['facts'];

  declare code: string;
  declare roundId: string | null;
  declare zoneId: string | null;
  declare state: 'printed' | 'closed' | 'received' | 'void';
  declare facts: unknown;
  declare closedBy: string | null;
  declare closedAt: Date | null;
  declare receivedBy: string | null;
  declare receivedAt: Date | null;
  declare createdAt: Date;
}
