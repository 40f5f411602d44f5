import { allocationVariance, finiteTerm, maximumOf, minimumOf, neymanTotal, targetVariance, totalVines, type AllocationZone } from './allocate.ts';
import { allocationMethod, type AllocationMethodId } from './allocationMethods.ts';
import { checkConfidence, checkMargin } from './margins.ts';
import { criticalT, criticalZ } from './quantiles.ts';

/** How many samples for the mean over several zones (a block, a lot), shared by a method. Cochran 1977 ch. 5. */
export interface BlockQuestion {
  readonly zones: readonly AllocationZone[];
  readonly margin: number;
  readonly confidence: number;
  readonly method: AllocationMethodId;
  /** 't' allows for the spread being re-estimated from these samples (Satterthwaite); 'z' takes it as known. */
  readonly factor?: 't' | 'z';
}

export interface BlockAnswer {
  readonly counts: readonly number[];
  readonly total: number;
  readonly variance: number;
  readonly df: number;
  readonly halfWidth: number;
  /** False when even all allowed samples miss the margin. */
  readonly reached: boolean;
  /** True when the zones' minimum alone already keeps the margin. */
  readonly atMinimum: boolean;
}

/** Precision of given counts. Example: vines 900 600 300, S 1.1 0.8 1.5, counts 15 8 7 → variance 0.037321. */
export function blockPrecision(zones: readonly AllocationZone[], counts: readonly number[], how: { confidence: number; factor?: 't' | 'z' }): Omit<BlockAnswer, 'reached' | 'atMinimum'> {
  const variance = allocationVariance(zones, counts);
  const df = satterthwaite(zones, counts, variance);
  const isKnown = variance === 0 || (df > 0 && Number.isFinite(variance));
  const factor = !isKnown ? Number.NaN : (how.factor ?? 't') === 'z' ? criticalZ(how.confidence) : criticalT(how.confidence, df);
  // A zone with a single sample and more vines than that says nothing of its spread.
  const halfWidth = variance === 0 ? 0 : factor * Math.sqrt(variance);
  return { counts: [...counts], total: counts.reduce((sum, n) => sum + n, 0), variance, df, halfWidth };
}

/**
 * Degrees of freedom of the mean over zones (Satterthwaite 1946): of the planned counts, or of the pilot where its spread
 * stays fixed, which carries the two-stage rule over to several zones.
 */
function satterthwaite(zones: readonly AllocationZone[], counts: readonly number[], variance: number): number {
  if (variance === 0) return Infinity;
  const all = totalVines(zones);
  let sum = 0;
  zones.forEach((zone, i) => {
    const n = counts[i]!;
    const left = 1 / n - finiteTerm(zone);
    if (left <= 0 || zone.sd === 0) return;
    const share = zone.vines / all;
    const part = share * share * zone.sd * zone.sd * left;
    sum += (part * part) / (zone.spreadDf ?? n - 1);
  });
  return (variance * variance) / sum;
}

/**
 * The smallest total whose sharing keeps the margin: one fewer would miss it. No sharing can do with fewer than the
 * Neyman total, where the search starts; it doubles its step until the margin is kept, then halves the gap.
 */
export function blockSampleSize({ zones, margin, confidence, method, factor = 't' }: BlockQuestion): BlockAnswer {
  checkMargin(margin);
  checkConfidence(confidence);
  const least = zones.reduce((sum, zone) => sum + minimumOf(zone), 0);
  const most = zones.reduce((sum, zone) => sum + maximumOf(zone), 0);
  const share = allocationMethod(method).counts;
  const answerAt = (total: number): BlockAnswer => {
    const answer = blockPrecision(zones, share(zones, total), { confidence, factor });
    return { ...answer, reached: answer.halfWidth <= margin * (1 + 1e-12), atMinimum: answer.total <= least };
  };
  const bound = Math.min(most, Math.max(least, Math.floor(neymanTotal(zones, targetVariance(margin, criticalZ(confidence))))));
  let best = answerAt(bound);
  let missed = bound;
  for (let step = 1; !best.reached && missed < most; step *= 2) {
    const next = Math.min(most, bound + step);
    best = answerAt(next);
    if (!best.reached) missed = next;
  }
  while (best.reached && best.total - missed > 1) {
    const middle = answerAt(Math.floor((missed + best.total) / 2));
    if (middle.reached) best = middle;
    else missed = middle.total;
  }
  return best;
}
