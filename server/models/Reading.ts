import type { Point } from 'geojson';
import { EstateModel } from './BaseModel.ts';

export class Reading extends EstateModel {
  static override tableName = 'readings';
  static override jsonAttributes = ['flags'];

  declare seasonId: string;
  declare blockId: string;
  declare rowId: string | null;
  declare ordinal: number | null;
  declare position: Point | null;
  declare roundId: string | null;
  declare targetId: string | null;
  declare bagId: string | null;
  declare measureCode: string;
  declare value: number;
  declare unit: string;
  declare valueTyped: string | null;
  declare unitTyped: string | null;
  declare samples: number;
  declare takenAt: Date;
  declare deviceTime: Date | null;
  declare receivedAt: Date;
  declare personId: string | null;
  declare deviceId: string | null;
  declare source: 'field' | 'lab' | 'import' | 'paper' | 'demo';
  declare supersedes: string | null;
  declare state: 'provisional' | 'checked' | 'final';
  declare excludedReason: string | null;
  declare excludedBy: string | null;
  declare flags: unknown;
  declare note: string;
}
