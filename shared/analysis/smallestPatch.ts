/** The smallest patch of a zone where nobody says otherwise. */

const SHARE = 0.01;
const LEAST_HA = 0.01;
/** From five hectares on. */
export const MOST_PATCH_HA = 0.05;

/**
 * In ha, to the hundredth: a hundredth of the block, between 0.01 and 0.05 ha. A share of the map for its smallest unit is common
 * practice; one size for every block would wipe out, on two hectares, patches that are there. `smallestPatchFor(20_000)` is 0.02.
 */
export function smallestPatchFor(areaM2: number): number {
  return Math.round(Math.min(MOST_PATCH_HA, Math.max(LEAST_HA, (areaM2 / 10_000) * SHARE)) * 100) / 100;
}
