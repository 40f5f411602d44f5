import { AnalysisError } from '../analysis/analysisError.ts';
import { combineLinearly } from '../sampling/combineEstimates.ts';
import type { Estimate } from '../sampling/precision.ts';
import { asDependent, combineDependent, type Dependent } from './dependent.ts';

/**
 * What a lot from several zones will be like: weighted by expected tonnes, with the error of the zone values and of the
 * tonnes themselves (first order: law of propagation, JCGM 100:2008 §5); what zones have in common, such as a growth
 * factor, errs for all of them at once and moves no weight. Where any tonnes are unknown all weights fall back to area, and that is said.
 */
export interface LotPart {
  readonly zone: string;
  readonly areaHa: number;
  /** Null while nobody has estimated it. */
  readonly tonnes: Estimate | Dependent | null;
  readonly value: Estimate;
}

export interface LotValue extends Estimate {
  readonly weighting: 'tonnes' | 'area';
  /** Mean without weights, to show what weighting does. */
  readonly plainMean: number;
  readonly shares: readonly number[];
}

/** Example: 3.2 t at 24.1, 1.8 t at 22.6, 2.5 t at 23.3 → 23.473333 (plain 23.333333). */
export function lotValue(parts: readonly LotPart[]): LotValue {
  const { shares, weighting, total } = lotShares(parts);
  const value = parts.reduce((sum, part, i) => sum + shares[i]! * part.value.value, 0);
  const ofValues = combineLinearly(parts.map((part, i) => ({ factor: shares[i]!, estimate: part.value })));
  // A zone that is like the lot does not change it, however many tonnes it turns out to have.
  const ofWeights = weighting === 'tonnes' ? combineDependent(parts.map((part) => ({ factor: (part.value.value - value) / total, estimate: asDependent(part.tonnes!) }))) : null;
  const { standardError, df } = ofWeights === null ? ofValues : combineLinearly([{ factor: 1, estimate: ofValues }, { factor: 1, estimate: ofWeights }]);
  return {
    value,
    standardError,
    df,
    weighting,
    plainMean: parts.reduce((sum, part) => sum + part.value.value, 0) / parts.length,
    shares,
  };
}

function lotShares(parts: readonly LotPart[]): { shares: number[]; weighting: 'tonnes' | 'area'; total: number } {
  const known = parts.every(({ tonnes }) => tonnes !== null);
  const weights = parts.map((part) => (known ? part.tonnes!.value : part.areaHa));
  const total = weights.reduce((sum, weight) => sum + weight, 0);
  if (!(total > 0)) throw new AnalysisError('empty_lot', 'A lot needs at least one zone with tonnes or area above 0.');
  return { shares: weights.map((weight) => weight / total), weighting: known ? 'tonnes' : 'area', total };
}

export interface LotPh extends LotValue {
  /** Mean of the hydrogen ions turned back into pH. Neither figure is exact in buffered juice. */
  readonly viaHydrogen: number;
  /** Always true: the mixture must be measured. */
  readonly approximate: true;
}

/** Example: pH 3.3 and 3.6, half and half → 3.45 plain, 3.424595 by hydrogen ions. */
export function lotPh(parts: readonly LotPart[]): LotPh {
  const plain = lotValue(parts);
  const ions = parts.reduce((sum, part, i) => sum + plain.shares[i]! * 10 ** -part.value.value, 0);
  return { ...plain, viaHydrogen: -Math.log10(ions), approximate: true };
}

/** Tonnes of a lot; null when any part is unknown, since a sum of the rest would look complete. */
export function lotTonnes(parts: readonly Pick<LotPart, 'tonnes'>[]): Dependent | null {
  const known = parts.flatMap(({ tonnes }) => (tonnes === null ? [] : [{ factor: 1, estimate: asDependent(tonnes) }]));
  return known.length < parts.length ? null : combineDependent(known);
}
