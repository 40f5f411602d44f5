import { Model } from 'objection';

export class NoticeReader extends Model {
  static override tableName = 'notice_readers';
  static override idColumn = ['noticeId', 'personId'];

  declare noticeId: string;
  declare personId: string;
  declare readAt: Date | null;
}
