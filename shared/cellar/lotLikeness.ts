import { AnalysisError } from '../analysis/analysisError.ts';
import type { Estimate } from '../sampling/precision.ts';

/**
 * How alike the zones of a lot are in one measure: how much of the spread of its fruit lies between zones and how much
 * inside them. The between part is corrected for the error of the zone means, which would pass for a difference.
 * Source: variance components by moments, as in one-way analysis of variance (Snedecor & Cochran ch. 13).
 */
export interface LikenessPart {
  readonly zone: string;
  /** Tonnes or area. */
  readonly weight: number;
  readonly mean: Estimate;
  /** Vine-to-vine spread inside the zone. */
  readonly sd: number;
}

export interface LotLikeness {
  readonly betweenVariance: number;
  readonly withinVariance: number;
  /** Spread of all fruit of the lot. */
  readonly totalSd: number;
  /** 0: the zones do not differ; 1: all spread is between them. */
  readonly betweenShare: number;
  /** The lot without each zone in turn. */
  readonly without: readonly { readonly zone: string; readonly mean: number; readonly totalSd: number; readonly betweenShare: number }[];
}

export function lotLikeness(parts: readonly LikenessPart[]): LotLikeness {
  const whole = components(parts);
  const without = parts.length < 2 ? [] : parts.map((left) => ({ zone: left.zone, ...pick(components(parts.filter((part) => part !== left))) }));
  return { ...whole, without };
}

function pick({ mean, totalSd, betweenShare }: ReturnType<typeof components>): { mean: number; totalSd: number; betweenShare: number } {
  return { mean, totalSd, betweenShare };
}

function components(parts: readonly LikenessPart[]): { mean: number; betweenVariance: number; withinVariance: number; totalSd: number; betweenShare: number } {
  const total = parts.reduce((sum, part) => sum + part.weight, 0);
  if (!(total > 0)) throw new AnalysisError('empty_lot', 'A lot needs at least one zone with tonnes or area above 0.');
  const shares = parts.map((part) => part.weight / total);
  const mean = parts.reduce((sum, part, i) => sum + shares[i]! * part.mean.value, 0);
  const seen = parts.reduce((sum, part, i) => sum + shares[i]! * (part.mean.value - mean) ** 2, 0);
  const byError = parts.reduce((sum, part, i) => sum + shares[i]! * (1 - shares[i]!) * part.mean.standardError ** 2, 0);
  const betweenVariance = Math.max(0, seen - byError);
  const withinVariance = parts.reduce((sum, part, i) => sum + shares[i]! * part.sd ** 2, 0);
  const all = betweenVariance + withinVariance;
  return { mean, betweenVariance, withinVariance, totalSd: Math.sqrt(all), betweenShare: all > 0 ? betweenVariance / all : 0 };
}
