import { AnalysisError } from '../analysis/analysisError.ts';

/**
 * Where one can walk in a block. Rows are walls; between them run alleys, in one order across the block. One changes
 * alley only on the headlands, at listed gaps, and at the inner ends of interrupted rows. All lengths in metres; t runs
 * along the rows, the bottom of an alley is its end with the lower t.
 */
export interface AlleyLayout {
  readonly alleys: readonly Alley[];
  /** Headland step from alley j to j + 1 at the bottoms and at the tops; null where one cannot pass. */
  readonly bottomM: readonly (number | null)[];
  readonly topM: readonly (number | null)[];
  readonly gaps: readonly AlleyGap[];
}

export interface Alley {
  /** Position across the rows, for drawing. */
  readonly s: number;
  readonly bottomT: number;
  readonly topT: number;
  /** Stretches that cannot be walked: a notch of the block, or all of an alley that is shut. */
  readonly breaks?: readonly (readonly [fromT: number, toT: number])[];
}

/** A way through the row between alley `alley` and the next, at t. */
export interface AlleyGap {
  readonly alley: number;
  readonly t: number;
  readonly lengthM: number;
}

/** A point of the layout: at an alley's end, inside an alley, or on the headland step from an alley to the next. */
export type WalkPlace = (
  | { readonly at: 'end'; readonly alley: number; readonly end: 'bottom' | 'top' }
  | { readonly at: 'alley'; readonly alley: number; readonly t: number }
  | { readonly at: 'headland'; readonly alley: number; readonly end: 'bottom' | 'top'; readonly share: number }
) & {
  /** The place itself lies off the layout, at the end of a path of its own. */
  readonly spur?: { readonly lengthM: number; readonly s: number; readonly t: number };
};

/** A vine to visit, from any of the listed alleys: one where the face of the canopy is prescribed, else both beside its row. */
export interface WalkTarget {
  readonly alleys: readonly number[];
  readonly t: number;
}

export interface WalkNode {
  /** Alley of the node; on a headland between two alleys the lower one. */
  readonly alley: number;
  readonly s: number;
  readonly t: number;
}

export interface WalkEdge {
  readonly a: number;
  readonly b: number;
  readonly lengthM: number;
  readonly kind: 'alley' | 'crossing' | 'spur';
}

/** The layout as a graph: edges in the order of the walk programme, column by column. */
export interface WalkNetwork {
  readonly nodes: readonly WalkNode[];
  readonly edges: readonly WalkEdge[];
  /** Nodes from which each target can be served. */
  readonly targetNodes: readonly (readonly number[])[];
  /** Nodes of the places, in the order they were given. */
  readonly placeNodes: readonly number[];
}

/** Refuses places and targets outside the layout; the message names the alley. */
export function checkOnLayout(layout: AlleyLayout, targets: readonly WalkTarget[], places: readonly WalkPlace[]): void {
  const check = (alley: number, t: number | null, what: string): void => {
    const found = layout.alleys[alley];
    const isOutside = found === undefined || (t !== null && !(t >= found.bottomT - 1e-6 && t <= found.topT + 1e-6));
    if (isOutside) {
      throw new AnalysisError('walk-off-layout', `${what} lies outside alley ${alley + 1} of ${layout.alleys.length}; build the walk from the rows as they are now.`);
    }
  };
  targets.forEach((target, i) => {
    if (target.alleys.length === 0) throw new AnalysisError('walk-off-layout', `Target ${i + 1} has no alley from which it can be reached; open an alley beside its row.`);
    for (const alley of target.alleys) check(alley, target.t, `Target ${i + 1}`);
  });
  for (const place of places) {
    check(place.alley, place.at === 'alley' ? place.t : null, 'The start or end of the walk');
    if (place.at === 'headland') check(place.alley + 1, null, 'The start or end of the walk');
  }
}
