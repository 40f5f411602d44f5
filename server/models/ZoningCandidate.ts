import { EstateModel } from './BaseModel.ts';

export class ZoningCandidate extends EstateModel {
  static override tableName = 'zoning_candidates';
  static override jsonAttributes = ['zones'];

  declare zoningId: string;
  declare zoneCount: number;
  declare labels: Buffer;
  declare doubt: Buffer | null;
  /** Planes of `shared/analysis/zoneMemberships.ts` behind each other. */
  declare memberships: Buffer | null;
  declare zones: unknown;
}
