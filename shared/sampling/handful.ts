import { AnalysisError } from '../analysis/analysisError.ts';
import type { Handful } from '../contracts/planChoices.ts';
import { criticalZ } from './quantiles.ts';
import { bestSplit, stageVariance, type StageSplit } from './twoStage.ts';

/**
 * How much fruit of a vine: the spread of a vine's value when other numbers of clusters and berries are taken than when
 * the spread was measured, and the numbers that cost least. All spreads on the scale of the measure's own (unit or share).
 * S² = S_b² + S_w²/m + S_e²/(mk); sources in twoStage.ts.
 */

/** S_b²: the part between vines alone. Throws where the parts within a vine already exceed the whole. */
export function betweenVines(spread: number, handful: Handful): number {
  const within = withinPart(handful, { perVine: handful.nowPerVine, perCluster: handful.nowPerCluster });
  const between = spread ** 2 - within;
  if (between > 0) return between;
  throw new AnalysisError('no_vine_spread', `The spread between clusters of a vine (${handful.withinVine}) leaves nothing between vines (${Number(spread.toPrecision(3))} in all). Enter a smaller one, or say that more clusters were taken then.`);
}

/** Spread of a vine's value with the chosen clusters and berries. Example: 1.25 with 1 cluster, S_w 0.707 → 1.146 with 2. */
export function handfulSpread(spread: number, handful: Handful): number {
  return Math.sqrt(betweenVines(spread, handful) + withinPart(handful, handful));
}

/** Share of the variance of a vine's value that lies between vines, where `spread` is the one with the chosen clusters and berries. */
export function betweenShare(spread: number, handful: Handful): number {
  return Math.max(0, 1 - withinPart(handful, handful) / spread ** 2);
}

/** Seconds at the vine for the chosen clusters and berries. */
export function handfulSeconds({ perVine, perCluster, secondsPerCluster, secondsPerBerry }: Handful): number {
  return perVine * (secondsPerCluster + (perCluster ?? 0) * secondsPerBerry);
}

function withinPart({ withinVine, withinCluster }: Handful, { perVine, perCluster }: { perVine: number; perCluster: number | null }): number {
  const variances = { betweenVines: 0, withinVine: withinVine ** 2, withinCluster: perCluster === null ? 0 : withinCluster ** 2 };
  return stageVariance(variances, { vines: 1, perVine, perCluster: perCluster ?? 1 });
}

export interface HandfulQuestion {
  readonly spread: number;
  readonly handful: Handful;
  readonly margin: number;
  readonly confidence: number;
  /** Walking to a vine and setting up there. */
  readonly secondsPerVine: number;
  /** Vines that the plan does not go below. */
  readonly minimumVines?: number;
}

/** Clusters a vine and berries a cluster at which a margin costs least time; the normal formula, because only the split is wanted. */
export function adviseHandful({ spread, handful, margin, confidence, secondsPerVine, minimumVines }: HandfulQuestion): StageSplit {
  const withBerries = handful.perCluster !== null && handful.withinCluster > 0;
  return bestSplit({
    variances: { betweenVines: betweenVines(spread, handful), withinVine: handful.withinVine ** 2, ...(withBerries ? { withinCluster: handful.withinCluster ** 2 } : {}) },
    costs: { perVine: Math.max(1, secondsPerVine), perCluster: Math.max(0.1, handful.secondsPerCluster), ...(withBerries ? { perBerry: Math.max(0.01, handful.secondsPerBerry) } : {}) },
    target: { variance: (margin / criticalZ(confidence)) ** 2 },
    maximumPerVine: 30,
    maximumPerCluster: 200,
    ...(minimumVines === undefined ? {} : { minimumVines }),
  });
}
