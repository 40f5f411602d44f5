/** Numbers that zones of a block may have. */
export const MAX_ZONE_NUMBER = 60;

/** The lowest number that no zone has; null where all are taken. */
export function lowestFreeNumber(zones: readonly { readonly number: number }[]): number | null {
  for (let number = 1; number <= MAX_ZONE_NUMBER; number++) if (!zones.some((zone) => zone.number === number)) return number;
  return null;
}
