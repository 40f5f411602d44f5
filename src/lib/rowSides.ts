import { lineBearing } from '../../shared/geo/rowFrame.ts';

export type Wind = 'n' | 'ne' | 'e' | 'se' | 's' | 'sw' | 'w' | 'nw';

/** Sides and ends of the row frame as a person in the block names them. */
export interface RowSides {
  readonly low: Wind;
  readonly high: Wind;
  readonly start: Wind;
  readonly end: Wind;
}

const winds: readonly Wind[] = ['n', 'ne', 'e', 'se', 's', 'sw', 'w', 'nw'];
const windOf = (bearingDeg: number): Wind => winds[Math.round((bearingDeg % 360) / 45) % 8]!;

/** Winds of the sides and ends of rows by their bearing; rows run from `start` to `end`, and are counted across to their right. */
export function rowSides(bearingDeg: number): RowSides {
  const along = lineBearing(bearingDeg);
  return { start: windOf(along + 180), end: windOf(along), low: windOf(along + 270), high: windOf(along + 90) };
}
