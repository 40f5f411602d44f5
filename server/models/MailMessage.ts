import { BaseModel } from './BaseModel.ts';

export class MailMessage extends BaseModel {
  static override tableName = 'mail_messages';

  declare estateId: string | null;
  declare kind: string;
  declare toAddress: string;
  declare toName: string;
  declare language: string;
  declare subject: string;
  declare bodyText: string;
  declare state: 'outbox' | 'sent' | 'failed';
  declare error: string | null;
  declare createdAt: Date;
  declare sentAt: Date | null;
}
