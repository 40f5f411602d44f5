/** Puts the outcome of the stages together into the rows of the zoning record. */

import type { GapAtK } from './verdictGap.ts';
import type { MembershipBands } from './zoneMemberships.ts';
import type { ZoneCountAdvice } from './zoneCount.ts';
import type { ZonePolygons } from './polygonise.ts';
import type { CellZones, FeatureTable } from './zoningFit.ts';
import type { FitQuality } from './zoningQuality.ts';
import { withPolygons, zoneDifferences } from './zoningStats.ts';
import type { Zone, ZoneEvidence, ZoningCandidate, ZoningWarning } from './zoningTypes.ts';

export interface CandidateParts {
  readonly zones: CellZones;
  /** What each zone is like, without polygons. */
  readonly described: readonly Zone[];
  /** Null leaves the polygons out. */
  readonly drawn: readonly ZonePolygons[] | null;
  /** Ids of the layers of numbers. */
  readonly numeric: readonly string[];
  readonly memberships: MembershipBands | null;
}

export function candidateOf(k: number, { zones: { labels, doubt }, described, drawn, numeric, memberships }: CandidateParts): ZoningCandidate {
  // Of several blocks zoned together one may lack a zone that the others have.
  const zones = withPolygons(described, drawn).filter(({ areaM2 }) => areaM2 > 0);
  return { k, labels, doubt, memberships, zones, differences: zoneDifferences(zones, numeric) };
}

/** One row for each k = 1…6: the figures of the fit, of the comparison with no structure, and of the cleaned zones. */
export function evidenceRows(quality: readonly FitQuality[], { curve, scores }: { curve: readonly GapAtK[]; scores: ZoneCountAdvice['scores'] }, candidates: readonly ZoningCandidate[]): ZoneEvidence[] {
  return quality.map((row, i) => {
    const zones = candidates[i]!.zones;
    const gap: GapAtK | undefined = curve.find(({ k }) => k === row.k);
    return {
      ...row,
      gap: gap?.gap ?? null,
      gapSd: gap?.gapSd ?? null,
      calmWithin: gap?.withinShare ?? null,
      holds: gap?.holds ?? null,
      score: scores.find(({ k }) => k === row.k)?.score ?? null,
      patches: zones.reduce((sum, zone) => sum + zone.patches, 0),
      smallestZoneHa: Math.min(...zones.map(({ areaM2 }) => areaM2)) / 10_000,
    };
  });
}

/** More vines than this outside their own zone, and following the rows has changed what was found (judgement). */
const MUCH_AGAINST_GROUND = 0.1;

export interface WarningInput {
  readonly chosen: ZoningCandidate;
  /** Zones that clean-up left in all blocks together. */
  readonly leftByCleaning: number;
  /** Of these, the zones that are left once borders follow the rows; one block may lack some that another has. */
  readonly leftInAll: number;
  readonly advisedK: number;
  /** More than one zone would be worth it, and no number of them survives clean-up. */
  readonly noneWorkable: boolean;
  readonly table: FeatureTable;
  /** Vines that borders along the rows put into another zone than their ground, as a share; null where borders are free. */
  readonly againstGround: number | null;
}

/** Things about the result that a person should know before using it. */
export function resultWarnings({ chosen, leftByCleaning, leftInAll, advisedK, noneWorkable, table, againstGround }: WarningInput): ZoningWarning[] {
  const warnings: ZoningWarning[] = [];
  const inside = table.cells.length + table.incomplete.length;
  if (table.incomplete.length > 0) warnings.push({ code: 'cells-filled', about: null, figures: { cells: table.incomplete.length, share: table.incomplete.length / inside } });
  if (noneWorkable) warnings.push({ code: 'none-workable', about: null, figures: {} });
  if (leftByCleaning < chosen.k) warnings.push({ code: 'zone-vanished', about: null, figures: { wanted: chosen.k, left: leftByCleaning } });
  if (leftInAll < leftByCleaning) warnings.push({ code: 'rows-took-zone', about: null, figures: { wanted: leftByCleaning, left: leftInAll } });
  if (chosen.zones.length < leftInAll) warnings.push({ code: 'zone-elsewhere', about: null, figures: { wanted: leftInAll, left: chosen.zones.length } });
  if (chosen.k !== advisedK) warnings.push({ code: 'number-fixed', about: null, figures: { chosen: chosen.k, advised: advisedK } });
  if (againstGround !== null && againstGround > MUCH_AGAINST_GROUND) warnings.push({ code: 'rows-against-ground', about: null, figures: { share: againstGround } });
  return warnings;
}
