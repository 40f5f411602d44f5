import type { ZoneInfo } from '../../shared/analysis/edits.ts';
import { EstateModel } from './BaseModel.ts';

export class Zoning extends EstateModel {
  static override tableName = 'zonings';
  static override jsonAttributes = ['options', 'verdict', 'evidence', 'baseZones'];

  declare blockId: string;
  declare seasonId: string;
  declare number: number;
  declare name: string;
  declare state: 'running' | 'proposed' | 'draft' | 'live' | 'retired' | 'failed';
  declare options: unknown;
  declare seed: number;
  declare engineVersion: string;
  declare gridKey: string;
  declare verdict: unknown;
  declare evidence: unknown;
  declare advisedZones: number | null;
  declare chosenZones: number | null;
  declare baseLabels: Buffer | null;
  /** Names and colours that the edits begin with. */
  declare baseZones: ZoneInfo[];
  declare labels: Buffer | null;
  declare revision: number;
  declare publishedAt: Date | null;
  declare publishedBy: string | null;
  declare createdBy: string | null;
  declare createdAt: Date;
}
