import type { ZoningComparison, ZoningView } from '../../../shared/contracts/zonings.ts';

/** Another zoning of the same block with what it has in common with the one on screen. */
export interface ComparedZonings {
  readonly other: ZoningView;
  readonly comparison: ZoningComparison;
}
