import type { Point } from 'geojson';
import { EstateModel } from './BaseModel.ts';

export class Reading extends EstateModel {
  static override tableName = 'readings';
  static override jsonAttributes = ['flags', 'exclusionProposal', 'seenAs'];

  declare seasonId: string;
  /** Null for figures of a bag that nobody has told the origin of yet. */
  declare blockId: string | null;
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
  declare typedBy: string | null;
  declare deviceId: string | null;
  declare source: 'field' | 'lab' | 'import' | 'paper' | 'demo';
  declare supersedes: string | null;
  declare state: 'provisional' | 'checked' | 'final';
  declare excludedReason: string | null;
  declare excludedBy: string | null;
  declare flags: unknown;
  declare note: string;
  declare instrument: string;
  declare method: string;
  declare analysedOn: string | null;
  declare labFileId: string | null;
  /** The table of earlier readings that it came with. */
  declare earlierFileId: string | null;
  /** Who gave it its state last, and when. */
  declare stateBy: string | null;
  declare stateAt: Date | null;
  declare exclusionProposal: { reason: string; by: string; at: string } | null;
  /** Row and vine as they were shown where it was read. */
  declare seenAs: { row: string; vine: number } | null;
}
