import { EstateModel } from './BaseModel.ts';

export class FileImport extends EstateModel {
  static override tableName = 'imports';
  static override jsonAttributes = ['understood', 'questions', 'answers', 'warnings', 'problem'];

  declare fileId: string;
  declare format: string;
  declare state: 'reading' | 'asks' | 'ready' | 'done' | 'refused';
  declare understood: unknown;
  declare questions: unknown;
  declare answers: unknown;
  declare warnings: unknown;
  declare problem: unknown;
  declare createdBy: string | null;
  declare createdAt: Date;
  declare finishedAt: Date | null;
}
