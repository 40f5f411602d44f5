import type { LonLat, XY } from './coordinates.ts';

/**
 * The frame in which rows are lines: t runs along the row, s runs across it to the right of the bearing.
 * With bearing b in [0, 180): along = (sin b, cos b), across = (cos b, -sin b) on UTM axes.
 * Low s is the left side seen along the bearing; the "start" of a row is its end with the lower t.
 *
 *   b 0-45: start south, low s west    b 45-135: start west, low s north    b 135-180: start north, low s east
 */
export interface RowFrame {
  /** Subtracted before projecting, so that small differences keep their digits. */
  readonly originXY: XY;
  /** Clockwise from grid north, in [0, 180). */
  readonly gridBearingDeg: number;
}

export interface AlongAcross {
  readonly s: number;
  readonly t: number;
}

/** Bearing of a line without direction: 210 and 30 are the same rows. */
export function lineBearing(bearingDeg: number): number {
  const folded = bearingDeg % 180;
  const positive = folded < 0 ? folded + 180 : folded;
  return positive === 180 ? 0 : positive;
}

/** Unit vector along the rows, on UTM axes. */
export function alongRow(frame: RowFrame): XY {
  const radians = (frame.gridBearingDeg * Math.PI) / 180;
  return [Math.sin(radians), Math.cos(radians)];
}

/** Position in metres across (s) and along (t) the rows. */
export function toAlongAcross(frame: RowFrame, pointXY: XY): AlongAcross {
  const [ux, uy] = alongRow(frame);
  const dx = pointXY[0] - frame.originXY[0];
  const dy = pointXY[1] - frame.originXY[1];
  return { s: dx * uy - dy * ux, t: dx * ux + dy * uy };
}

/** Inverse of `toAlongAcross`. */
export function fromAlongAcross(frame: RowFrame, position: AlongAcross): XY {
  const [ux, uy] = alongRow(frame);
  const { s, t } = position;
  return [frame.originXY[0] + s * uy + t * ux, frame.originXY[1] - s * ux + t * uy];
}

/** Mean of the ring's vertices, the closing one left out: where the block's meridian convergence is taken. */
export function ringMiddle(ring: readonly LonLat[]): LonLat {
  const first = ring[0]!;
  const last = ring.at(-1)!;
  const closed = ring.length > 1 && first[0] === last[0] && first[1] === last[1];
  const count = closed ? ring.length - 1 : ring.length;
  let lon = 0;
  let lat = 0;
  for (let vertex = 0; vertex < count; vertex++) {
    lon += ring[vertex]![0];
    lat += ring[vertex]![1];
  }
  return [lon / count, lat / count];
}
