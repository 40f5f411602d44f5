import type { Estimate } from '../sampling/precision.ts';

/**
 * Tonnes a hectare of a zone as the scale had them. Every vine was picked, so nothing is sampled: what could still pass
 * for a difference between zones is the chance by which one vine bears more than the next (the zone as a draw of its
 * vines, s/√N), the scale, and bins that were not filled alike. All taken as known, so normal.
 */
export interface WeighedZone {
  readonly kg: number;
  readonly areaHa: number;
  readonly vines: number;
  /** Counted bins by which a mixed load was parted; 0 where the zone was on the scale by itself. */
  readonly bins: number;
}

/** Yield a vine as a coefficient of variation; 30 to 50 % inside a block (Aizpurua et al. 2006 has 50 % on 8 ha; the rest common practice). */
const VINE_CV = 0.4;
/** A scale in service, common practice. */
const SCALE_CV = 0.005;
/** Bins of one load filled by different hands, common practice. */
const BIN_CV = 0.1;

/** Example: 8000 kg from 1 ha and 1600 vines → 8 t/ha, se 8·√(0.01² + 0.005²) = 0.0894. */
export function weighedYield({ kg, areaHa, vines, bins }: WeighedZone): Estimate {
  const value = kg / 1000 / areaHa;
  const relative = VINE_CV ** 2 / vines + SCALE_CV ** 2 + (bins > 0 ? BIN_CV ** 2 / bins : 0);
  return { value, standardError: value * Math.sqrt(relative), df: Infinity };
}
