/** Where a figure comes from. The bar's fill and the word say the same. */
export type EvidenceKind = 'measured' | 'estimated' | 'forecast' | 'expected' | 'assumed';

/** A figure as it may be shown: never a bare number. */
export interface Evidence {
  readonly value: number;
  /** Half-width of the range; null when there is none (one reading). */
  readonly halfWidth: number | null;
  /** Ends of a range that is not symmetric; they win over halfWidth for the bar. */
  readonly low?: number;
  readonly high?: number;
  readonly unit: string;
  readonly decimals?: number;
  /** Readings behind it; null for an assumed figure. */
  readonly n: number | null;
  /** Share, 0.95; null where the column head says it for all. */
  readonly confidence: number | null;
  readonly kind: EvidenceKind;
}

export interface BarEnds {
  readonly low: number;
  readonly high: number;
}

export function rangeOf(evidence: Evidence): BarEnds | null {
  if (evidence.low !== undefined && evidence.high !== undefined) return { low: evidence.low, high: evidence.high };
  return evidence.halfWidth === null ? null : { low: evidence.value - evidence.halfWidth, high: evidence.value + evidence.halfWidth };
}

/** One scale for all bars of a column: the widest ends, rounded out by a twentieth. Null when nothing has a value. */
export function sharedScale(all: readonly Evidence[], also: readonly number[] = []): readonly [number, number] | null {
  const ends = all.flatMap((evidence) => {
    const range = rangeOf(evidence);
    return range === null ? [evidence.value] : [range.low, range.high];
  });
  const values = [...ends, ...also].filter((value) => Number.isFinite(value));
  if (values.length === 0) return null;
  const [low, high] = [Math.min(...values), Math.max(...values)];
  const room = high > low ? (high - low) / 20 : Math.max(1, Math.abs(high)) / 20;
  return [low - room, high + room];
}
