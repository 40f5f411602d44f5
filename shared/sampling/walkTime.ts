import type { XY } from '../geo/coordinates.ts';
import type { Walk } from './walk.ts';

/** Walking speed by steepness; an estate replaces the figures by its own timings. */
export interface SlopeClass {
  /** Applies below this slope, in percent; Infinity for the last class. */
  readonly belowPercent: number;
  readonly speedMS: number;
}

/** Class figures: `twoWaySpeed` at 2.5, 10, 22.5 and 40 percent. */
export const USUAL_PACE: readonly SlopeClass[] = [
  { belowPercent: 5, speedMS: 0.836 },
  { belowPercent: 15, speedMS: 0.694 },
  { belowPercent: 30, speedMS: 0.448 },
  { belowPercent: Infinity, speedMS: 0.243 },
];

/**
 * Speed in m/s off a made path on a slope walked once up and once down: harmonic mean of 6 exp(-3.5 |S + 0.05|) km/h for
 * both directions, times 0.6 off-path (Tobler 1993, hiking function; both from memory). Flat: 0.8395.
 */
export function twoWaySpeed(slopePercent: number): number {
  const oneWay = (slope: number): number => (6 / 3.6) * Math.exp(-3.5 * Math.abs(slope + 0.05));
  const slope = slopePercent / 100;
  return (0.6 * 2) / (1 / oneWay(slope) + 1 / oneWay(-slope));
}

/** What each class above the first leaves of the speed on level ground. */
export const USUAL_SLOPE_SPEEDS: readonly number[] = USUAL_PACE.slice(1).map(({ speedMS }) => speedMS / USUAL_PACE[0]!.speedMS);

export function speedOnSlope(slopePercent: number, pace: readonly SlopeClass[] = USUAL_PACE): number {
  const found = pace.find(({ belowPercent }) => Math.abs(slopePercent) < belowPercent) ?? pace.at(-1);
  if (found === undefined) throw new Error('a pace has at least one slope class');
  return found.speedMS;
}

export interface PacedGround {
  /** Elevation in metres, NaN where unknown; level ground when left out. */
  readonly elevationM?: (xy: XY) => number;
  readonly pace?: readonly SlopeClass[];
}

/** Elevation is read this often along a way, so that a dip between two vines counts, and never over less, so that its noise does not. */
const READ_EVERY_M = 10;

/** A straight way between two points of the map. */
export interface StraightWay {
  readonly fromXY: XY;
  readonly toXY: XY;
  readonly lengthM: number;
}

/** Seconds along a straight way of `lengthM`, the same in both directions. */
export function secondsAlong(way: StraightWay, { elevationM, pace }: PacedGround): number {
  if (elevationM === undefined || way.lengthM === 0) return way.lengthM / speedOnSlope(0, pace);
  const { partM, slopes } = slopesAlong(way, elevationM);
  return slopes.reduce((seconds, slope) => seconds + partM / speedOnSlope(slope, pace), 0);
}

/** Metres of a straight way in each class of `USUAL_PACE`. */
export function metresBySlope(way: StraightWay, elevationM: PacedGround['elevationM']): number[] {
  const metres = USUAL_PACE.map(() => 0);
  if (way.lengthM === 0) return metres;
  const { partM, slopes } = elevationM === undefined ? { partM: way.lengthM, slopes: [0] } : slopesAlong(way, elevationM);
  for (const slope of slopes) metres[USUAL_PACE.findIndex(({ belowPercent }) => Math.abs(slope) < belowPercent)]! += partM;
  return metres;
}

/** Slopes in percent of equal parts of a way; 0 where elevation is unknown. */
function slopesAlong(way: StraightWay, elevationM: (xy: XY) => number): { partM: number; slopes: number[] } {
  const parts = Math.max(1, Math.ceil(way.lengthM / READ_EVERY_M));
  const partM = way.lengthM / parts;
  const heightAt = (alongM: number): number => elevationM([
    way.fromXY[0] + ((way.toXY[0] - way.fromXY[0]) * alongM) / way.lengthM,
    way.fromXY[1] + ((way.toXY[1] - way.fromXY[1]) * alongM) / way.lengthM,
  ]);
  const slopeBetween = (fromM: number, toM: number): number => (100 * (heightAt(toM) - heightAt(fromM))) / (toM - fromM);
  const beyondM = (READ_EVERY_M - partM) / 2;
  const slopes = Array.from({ length: parts }, (_, i) => {
    const [fromM, toM] = [i * partM, (i + 1) * partM];
    const wide = beyondM > 0 ? slopeBetween(fromM - beyondM, toM + beyondM) : Number.NaN;
    const slopePercent = Number.isNaN(wide) ? slopeBetween(fromM, toM) : wide;
    return Number.isNaN(slopePercent) ? 0 : slopePercent;
  });
  return { partM, slopes };
}

export interface WalkTime {
  readonly walkingS: number;
  readonly serviceS: number;
  readonly totalS: number;
}

/** Time of a walk whose cost is in seconds, with the time spent at each vine (the sum over the measures taken there). */
export function walkTime(walk: Pick<Walk, 'cost' | 'stops'>, serviceSOf: (target: number) => number): WalkTime {
  const serviceS = walk.stops.reduce((sum, { target }) => sum + serviceSOf(target), 0);
  return { walkingS: walk.cost, serviceS, totalS: walk.cost + serviceS };
}
