import { proportionalShares, type AllocationZone } from './allocate.ts';
import { exactCounts, nearestCounts } from './wholeCounts.ts';

/** How a total is shared between zones. Counts are whole, keep each zone's minimum and never exceed its vines. */
export interface AllocationMethod {
  readonly id: string;
  readonly counts: (zones: readonly AllocationZone[], total: number) => number[];
}

export const allocationMethods = [
  { id: 'equal', counts: (zones, total) => nearestCounts(zones, zones.map(() => total / zones.length), total) },
  { id: 'area', counts: (zones, total) => nearestCounts(zones, proportionalShares(zones, total), total) },
  { id: 'spread', counts: (zones, total) => exactCounts(zones, total) },
  { id: 'spreadAndCost', counts: (zones, total) => exactCounts(zones, total, { byCost: true }) },
] as const satisfies readonly AllocationMethod[];

export type AllocationMethodId = (typeof allocationMethods)[number]['id'];

export function allocationMethod(id: AllocationMethodId): AllocationMethod {
  return allocationMethods.find((method) => method.id === id)!;
}
