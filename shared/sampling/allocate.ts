import { HARD_MINIMUM } from './sampleSize.ts';

/**
 * Sharing a number of samples between zones so that the mean over all of them is known best.
 * N vines and spread S per zone, W = N/ΣN. Sources: Cochran 1977 §§5.5–5.9; Neyman 1934; exact whole numbers
 * Wright 2012, The American Statistician 66:217 (the arithmetic of equal proportions for seats in parliament).
 */
export interface AllocationZone {
  readonly vines: number;
  /** Spread in the measure's unit (or any unit common to the zones). */
  readonly sd: number;
  /** Cost of one sample (seconds, money); 1 when left out. */
  readonly cost?: number;
  readonly minimum?: number;
  readonly maximum?: number;
  /** Share of the variance that reading every vine would take away (see `halfWidth`); 1 when left out. */
  readonly finiteShare?: number;
  /** Degrees of freedom of a spread that was measured before; from the samples themselves when left out. */
  readonly spreadDf?: number | null;
}

/** f/N: what a finite zone takes off 1/n. */
export function finiteTerm({ vines, finiteShare = 1 }: { readonly vines: number; readonly finiteShare?: number }): number {
  return finiteShare / vines;
}

export function costOf(zone: AllocationZone): number {
  return zone.cost ?? 1;
}

export function minimumOf(zone: AllocationZone): number {
  return Math.min(zone.minimum ?? HARD_MINIMUM, maximumOf(zone));
}

export function maximumOf(zone: AllocationZone): number {
  return Math.min(zone.maximum ?? zone.vines, zone.vines);
}

export function totalVines(zones: readonly { readonly vines: number }[]): number {
  return zones.reduce((sum, zone) => sum + zone.vines, 0);
}

function sumOver(zones: readonly AllocationZone[], term: (zone: AllocationZone) => number): number {
  return zones.reduce((sum, zone) => sum + term(zone), 0);
}

/** ΣW²(1 − f·n/N)S²/n: variance of the mean over all zones. Infinity when a zone with spread has no sample. */
export function allocationVariance(zones: readonly AllocationZone[], counts: readonly number[]): number {
  const all = totalVines(zones);
  return zones.reduce((sum, zone, i) => {
    const n = counts[i]!;
    const share = zone.vines / all;
    const left = 1 / n - finiteTerm(zone);
    return zone.sd === 0 || left <= 0 ? sum : sum + share * share * zone.sd * zone.sd * left;
  }, 0);
}

/** (E/z)²: the variance that just keeps margin E with the factor z (or t). */
export function targetVariance(margin: number, factor: number): number {
  return (margin / factor) ** 2;
}

/** Unrounded shares n·W. */
export function proportionalShares(zones: readonly AllocationZone[], total: number): number[] {
  const all = totalVines(zones);
  return zones.map((zone) => (total * zone.vines) / all);
}

/** Unrounded shares by spread, n·NS/ΣNS. Example: vines 900 600 300, S 1.1 0.8 1.5, n 30 → 15.46875 7.5 7.03125. */
export function neymanShares(zones: readonly AllocationZone[], total: number): number[] {
  const all = sumOver(zones, (zone) => zone.vines * zone.sd);
  return all > 0 ? zones.map((zone) => (total * zone.vines * zone.sd) / all) : proportionalShares(zones, total);
}

/** Unrounded shares by spread and cost, n ∝ NS/√c. */
export function costShares(zones: readonly AllocationZone[], total: number): number[] {
  const all = sumOver(zones, (zone) => (zone.vines * zone.sd) / Math.sqrt(costOf(zone)));
  if (all === 0) return proportionalShares(zones, total);
  return zones.map((zone) => (total * zone.vines * zone.sd) / Math.sqrt(costOf(zone)) / all);
}

/** Unrounded shares that spend a budget (over fixed cost) best. Example: costs 2 2 5, budget 90 → 20.42 9.90 5.87. */
export function costSharesForBudget(zones: readonly AllocationZone[], budget: number): number[] {
  const all = sumOver(zones, (zone) => zone.vines * zone.sd * Math.sqrt(costOf(zone)));
  return zones.map((zone) => (budget * zone.vines * zone.sd) / Math.sqrt(costOf(zone)) / all);
}

/** Unrounded total for a target variance when shared by spread: the least that any sharing can reach. */
export function neymanTotal(zones: readonly AllocationZone[], variance: number): number {
  const all = totalVines(zones);
  const spread = sumOver(zones, (zone) => (zone.vines / all) * zone.sd);
  return (spread * spread) / (variance + populationTerm(zones));
}

/** Unrounded total for a target variance when shared by size, and before the finite population correction. */
export function proportionalTotal(zones: readonly AllocationZone[], variance: number): { readonly total: number; readonly uncorrected: number } {
  const all = totalVines(zones);
  const uncorrected = sumOver(zones, (zone) => (zone.vines / all) * zone.sd * zone.sd) / variance;
  return { total: uncorrected / (1 + uncorrected / all), uncorrected };
}

/** Unrounded total for a target variance when shared by spread and cost. */
export function costTotal(zones: readonly AllocationZone[], variance: number): number {
  const all = totalVines(zones);
  const dear = sumOver(zones, (zone) => (zone.vines / all) * zone.sd * Math.sqrt(costOf(zone)));
  const cheap = sumOver(zones, (zone) => ((zone.vines / all) * zone.sd) / Math.sqrt(costOf(zone)));
  return (dear * cheap) / (variance + populationTerm(zones));
}

/** ΣW·f·S²/N with N the vines of all zones: what the finite zones take off the variance. */
function populationTerm(zones: readonly AllocationZone[]): number {
  const all = totalVines(zones);
  return sumOver(zones, (zone) => ((zone.finiteShare ?? 1) * (zone.vines / all) * zone.sd * zone.sd) / all);
}
