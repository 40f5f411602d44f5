/** What goes into a zoning and what comes out. Everything is plain data, so that it can be stored and compared. */

import type { MultiPolygonLonLat, MultiPolygonXY } from '../geo/coordinates.ts';
import type { Cells, Grid, Labels } from './grid.ts';
import type { LayerAdvice } from './layerAdvice.ts';
import type { LayerPair } from './layerPairs.ts';
import type { RowsXY } from '../geo/rowsLayout.ts';
import type { VineTable } from '../geo/vines.ts';
import type { SnapMode } from './snapToRows.ts';
import type { StandardMethod } from './standardise.ts';
import type { MembershipBands } from './zoneMemberships.ts';
import type { VerdictResult } from './verdict.ts';
import type { FruitCheck } from './verdictFruit.ts';

export interface ZoningLayer {
  readonly id: string;
  /** What people call it, where that is not its id: said in refusals. */
  readonly name?: string;
  readonly type: string;
  /** Evidence is measured on the vines or in the soil of this block; context only describes the place. */
  readonly role: 'evidence' | 'context';
  /** Classes are codes without order, such as soil units. */
  readonly kind: 'number' | 'class';
  /** One value a grid cell in the layer's own unit, NaN where missing. */
  readonly cells: Cells;
  /** Null takes the advised weight; 0 leaves the layer out. */
  readonly weight: number | null;
}

export interface ZoningOptions {
  /** Advise looks for the best number; 1…6 fixes it. Candidates for all six are made either way. */
  readonly zones: 'advise' | number;
  readonly standardise: StandardMethod;
  /** Gaussian smoothing of pictures of the vines, metres; hides rows and pixel noise. 0 smooths nothing. */
  readonly smoothingM: number;
  /** Patches smaller than this join a neighbour. */
  readonly smallestPatchHa: number;
  /** Parts of a zone narrower than this join a neighbour, metres. 0 leaves them. */
  readonly narrowestM: number;
  /** Borders along the rows, for a harvester (whole rows) or pickers (parts of rows); free leaves them as the ground has them. */
  readonly borders: 'free' | SnapMode;
  /** Replace the weighted layers by their principal components. */
  readonly principalComponents: boolean;
  readonly seed: number;
  /** Draw polygons for every number of zones, not for the chosen one alone. */
  readonly drawAll: boolean;
  /** Keep how far every cell belongs to each zone. */
  readonly memberships: boolean;
}

/** Readings of one measure of fruit, by grid cell (-1 outside the grid). They test zones and never make them. */
export interface ZoningReadings {
  readonly measure: string;
  /** Day of the visit, for the record; the test does not look at it. */
  readonly on?: string;
  readonly values: readonly { readonly cell: number; readonly row: string | null; readonly value: number }[];
}

export interface BlockInput {
  readonly grid: Grid;
  readonly layers: readonly ZoningLayer[];
  readonly readings?: readonly ZoningReadings[];
  /** Rows and vines of the block; needed for borders along them. */
  readonly planting?: { readonly rows: RowsXY; readonly vines: VineTable };
}

export interface ZoningInput extends BlockInput {
  readonly options?: Partial<ZoningOptions>;
  /** Other blocks with the same layers, to be zoned as one with this block, on the coarsest cells of all; weights are those of this block. */
  readonly together?: readonly BlockInput[];
}

export type ZoningStage = 'prepare' | 'layer advice' | 'evidence' | 'clusters' | 'quality' | 'clean-up' | 'polygons' | 'statistics' | 'fruit';

/** Called when a stage is done, with the share of the whole work done so far; the caller has the clock. */
export type StageMark = (stage: ZoningStage, share: number) => void;

export interface ZoneLayerStats {
  readonly layerId: string;
  readonly n: number;
  readonly mean: number | null;
  /** Population standard deviation of the zone's cells. */
  readonly sd: number | null;
}

export interface Zone {
  readonly number: number;
  readonly areaM2: number;
  readonly patches: number;
  readonly layers: readonly ZoneLayerStats[];
  /** Share of the zone's cells that could as well belong to another zone. */
  readonly doubtfulShare: number;
  /** Null when this number of zones was not drawn. */
  readonly polygonsXY: MultiPolygonXY | null;
  readonly polygonsLonLat: MultiPolygonLonLat | null;
}

export interface ZoningCandidate {
  readonly k: number;
  /** 1…k by rising mean of the first layer that has a weight, 0 outside. A zone that clean-up removed leaves no number free. */
  readonly labels: Labels;
  readonly zones: readonly Zone[];
  /** 0 (clear) … 1 (as near to another zone) per cell, NaN outside. */
  readonly doubt: Cells;
  /** A byte a cell and zone number (`zoneMemberships.ts`). Null for one zone, and when nobody asked. */
  readonly memberships: MembershipBands | null;
  /** Per layer the lowest and highest zone mean in the layer's own unit, and the spread within zones beside it. */
  readonly differences: readonly ZoneDifference[];
}

export interface ZoneDifference {
  readonly layerId: string;
  readonly lowest: number;
  readonly highest: number;
  /** Root of the mean squared deviation from the own zone's mean. */
  readonly withinSd: number;
  /** Share of the layer's variance over the cells that lies between zones, 0…1; null where it is the same everywhere. */
  readonly explained: number | null;
}

/** What speaks for one number of zones. Null where a figure has no meaning, as for one zone. */
export interface ZoneEvidence {
  readonly k: number;
  readonly varianceExplained: number;
  readonly silhouette: number | null;
  readonly calinskiHarabasz: number | null;
  readonly daviesBouldin: number | null;
  /** Agreement between fits on random halves (adjusted Rand index). */
  readonly stability: number | null;
  /** FPI, 0 where every cell belongs to one zone, 1 where all belong to all. */
  readonly fuzzinessIndex: number | null;
  /** Entropy of the memberships over ln k, 0…1; not the norm 1 − k/n of published tables (`fuzziness` gives both). */
  readonly classificationEntropy: number | null;
  /** ln of how much less is left within the zones than in random fields without zones, on the calm cells. */
  readonly gap: number | null;
  readonly gapSd: number | null;
  /** Share of the variance on the calm cells that is left within the zones. */
  readonly calmWithin: number | null;
  /** How well the weakest zone comes back when patches of ground are drawn anew, 0…1. */
  readonly holds: number | null;
  /** What the advised number is the highest of. */
  readonly score: number | null;
  readonly inertia: number;
  readonly patches: number;
  readonly smallestZoneHa: number;
}

export interface ZoningWarning {
  readonly code: 'layer-constant' | 'layer-coverage' | 'none-workable' | 'zone-vanished' | 'rows-took-zone' | 'zone-elsewhere' | 'number-fixed' | 'cells-filled' | 'rows-against-ground';
  readonly about: string | null;
  readonly figures: Readonly<Record<string, number>>;
}

export interface ZoningResult {
  readonly engineVersion: string;
  readonly gridKey: string;
  /** Cells that the zones were found on, metres: those of the block, or of the coarsest block zoned along. */
  readonly cellSizeM: number;
  readonly options: ZoningOptions;
  readonly weights: readonly { readonly layerId: string; readonly weight: number }[];
  readonly advisedWeights: readonly LayerAdvice[];
  /** How alike every two layers of numbers are. */
  readonly layerPairs: readonly LayerPair[];
  readonly verdict: VerdictResult;
  /** Ground that stands out and that no number of zones shows, with the verdict that says so. */
  readonly standsOut: MultiPolygonLonLat | null;
  readonly fruit: FruitCheck;
  /** Number of zones that the evidence speaks for: 1 when the verdict is one. */
  readonly advisedK: number;
  /** Best number above one, and others that deserve a look beside it. */
  readonly bestSeveral: number;
  readonly alsoOffer: readonly number[];
  readonly chosenK: number;
  readonly evidence: readonly ZoneEvidence[];
  readonly candidates: readonly ZoningCandidate[];
  /** Share of the variance of each principal component when they were asked for. */
  readonly componentShares: readonly number[] | null;
  readonly warnings: readonly ZoningWarning[];
}
