import { EstateModel } from './BaseModel.ts';

export class Plan extends EstateModel {
  static override tableName = 'plans';
  static override jsonAttributes = ['options', 'result', 'draws'];

  declare blockId: string;
  declare zoningId: string;
  declare seasonId: string;
  declare name: string;
  declare state: 'draft' | 'locked' | 'closed';
  declare isPilot: boolean;
  declare options: unknown;
  declare result: unknown;
  declare seed: number;
  declare engineVersion: string;
  declare draws: unknown;
  declare lockedAt: Date | null;
  declare createdBy: string | null;
  declare createdAt: Date;
}
