import { EstateModel } from './BaseModel.ts';

export class ScaleTicket extends EstateModel {
  static override tableName = 'scale_tickets';
  static override jsonAttributes = ['split'];

  declare lotId: string;
  declare ticketNo: string;
  declare grossKg: number;
  declare tareKg: number;
  declare netKg: number;
  declare unitTyped: string;
  declare weighedAt: Date;
  declare split: unknown;
  declare corrects: string | null;
  declare note: string;
  declare enteredBy: string;
  declare enteredAt: Date;
}
