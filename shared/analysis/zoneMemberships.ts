/**
 * How far every cell belongs to each zone: memberships of fuzzy c-means (Bezdek 1981, exponent 2) to the centres that the
 * zones were found with, and how much the two nearest zones are confused there (Burrough, van Gaans & Hootsmans 1997,
 * Geoderma 77: 115–135). Kept as a byte a cell and zone, since they are for looking at. Cost: a distance a cell and zone.
 */

import { membershipsFrom } from './fuzzy.ts';
import type { FeatureTable, ZoneFit } from './zoningFit.ts';

/** A whole membership; one step is 0.004, less than half of what two decimals show. */
export const WHOLE_MEMBERSHIP = 250;
/** Outside, and where a layer is missing: such a cell has no place among the centres. */
export const NO_MEMBERSHIP = 255;

/** A plane for each zone number, from 1 on. */
export type MembershipBands = readonly Uint8Array[];

/** Bands in the order of the zones' numbers: `fitted` names the zone of the fit that each number was. Null for fewer than two zones, which leave nothing to belong to beside. */
export function membershipBands({ cells, points }: FeatureTable, { centres }: ZoneFit, { fitted, cellCount }: { fitted: readonly number[]; cellCount: number }): MembershipBands | null {
  const count = fitted.length;
  if (count < 2) return null;
  const { dimensions } = points;
  const ordered = Float64Array.from({ length: count * dimensions }, (_, at) => centres[(fitted[Math.floor(at / dimensions)]! - 1) * dimensions + (at % dimensions)]!);
  const shares = membershipsFrom(points, ordered);
  return fitted.map((_, zone) => {
    const band = new Uint8Array(cellCount).fill(NO_MEMBERSHIP);
    for (let point = 0; point < cells.length; point++) band[cells[point]!] = Math.round(shares[point * count + zone]! * WHOLE_MEMBERSHIP);
    return band;
  });
}

/** Bands behind each other, as they are stored and sent. */
export function joinedBands(bands: MembershipBands): Uint8Array {
  const joined = new Uint8Array(bands.length * bands[0]!.length);
  bands.forEach((band, at) => joined.set(band, at * band.length));
  return joined;
}

export function partedBands(joined: Uint8Array, cellCount: number): MembershipBands {
  return Array.from({ length: joined.length / cellCount }, (_, at) => joined.subarray(at * cellCount, (at + 1) * cellCount));
}

export interface CellMembership {
  /** The zone that the cell was given, and how far it belongs there, 0…1. */
  readonly zone: number;
  readonly share: number;
  /** The zone that it belongs to most beside its own. */
  readonly next: number;
  readonly nextShare: number;
}

/** How far a cell belongs to its zone and to the next; null without a zone or where a layer is missing. */
export function membershipAt(bands: MembershipBands, cell: number, zone: number): CellMembership | null {
  const own = bands[zone - 1]?.[cell];
  if (own === undefined || own === NO_MEMBERSHIP) return null;
  let next = 0;
  for (let number = 1; number <= bands.length; number++) if (number !== zone && (next === 0 || bands[number - 1]![cell]! > bands[next - 1]![cell]!)) next = number;
  return { zone, share: own / WHOLE_MEMBERSHIP, next, nextShare: bands[next - 1]![cell]! / WHOLE_MEMBERSHIP };
}

/** Membership of the own zone less that of the next, 0…1: the confusion index turned round. A cell that was put into another zone than its nearest is not certain at all. */
export function certaintyOf({ share, nextShare }: CellMembership): number {
  return Math.max(0, share - nextShare);
}

/** Confusion index 1 − (first − second) of a cell, 0 (one zone alone) … 1 (two alike), whichever zone it was given; NaN where it has no memberships. */
export function confusionAt(bands: MembershipBands, cell: number): number {
  const [first, second] = bands.map((band) => band[cell]!).sort((a, b) => b - a);
  return first === NO_MEMBERSHIP ? Number.NaN : 1 - (first! - second!) / WHOLE_MEMBERSHIP;
}
