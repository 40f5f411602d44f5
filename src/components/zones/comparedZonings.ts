import type { ZoneView, ZoningComparison, ZoningView } from '../../../shared/contracts/zonings.ts';

/** Another zoning of the same block with what it has in common with the one on screen. */
export interface ComparedZonings {
  /** The zones of the one on screen as they were counted: another number may be shown since, or a hand have changed them. */
  readonly zones: readonly ZoneView[];
  readonly other: ZoningView;
  readonly comparison: ZoningComparison;
}
