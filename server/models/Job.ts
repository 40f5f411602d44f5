import { EstateModel } from './BaseModel.ts';

export class Job extends EstateModel {
  static override tableName = 'jobs';
  static override jsonAttributes = ['input', 'result'];

  declare kind: string;
  declare subjectType: string;
  declare subjectId: string | null;
  declare state: 'queued' | 'running' | 'done' | 'failed' | 'cancelled';
  declare stage: string;
  declare progress: number;
  declare input: Record<string, unknown>;
  declare result: unknown;
  declare problem: string | null;
  declare attempts: number;
  declare createdBy: string | null;
  declare createdAt: Date;
  declare startedAt: Date | null;
  declare heartbeatAt: Date | null;
  declare finishedAt: Date | null;
}
