/**
 * Fast maps of the plane, a row of positions at a time: exact for linear maps, and for a change of map projection a net of
 * exact points with straight lines between, as wide as the wanted accuracy allows.
 */

export interface PlaneMap {
  /** True when the first result depends on u only and the second on v only. */
  readonly isSeparable: boolean;
  /** Maps the positions (u + i, v), i = 0 … count − 1, into pairs. */
  row(place: { u: number; v: number; count: number }, pairs: Float64Array): void;
}

type PointMap = (u: number, v: number) => readonly [number, number];

/** A linear map as rows of positions; it is read off at three points, far apart so that no digits are lost. */
export function linearMap(point: PointMap): PlaneMap {
  const span = 4096;
  const [x0, y0] = point(0, 0);
  const [xu, yu] = point(span, 0);
  const [xv, yv] = point(0, span);
  const perU = [(xu - x0) / span, (yu - y0) / span] as const;
  const perV = [(xv - x0) / span, (yv - y0) / span] as const;
  return {
    isSeparable: perU[1] === 0 && perV[0] === 0,
    row({ u, v, count }, pairs) {
      for (let i = 0; i < count; i++) {
        pairs[2 * i] = x0 + (u + i) * perU[0] + v * perV[0];
        pairs[2 * i + 1] = y0 + (u + i) * perU[1] + v * perV[1];
      }
    },
  };
}

/** A map read off at the knots of a net over a window; positions between are off by at most about `tolerance`. */
export function latticeMap(point: PointMap, window: { firstCol: number; firstRow: number; cols: number; rows: number }, tolerance: number): PlaneMap {
  const step = widestStep(point, window, tolerance);
  const across = Math.ceil(window.cols / step) + 1;
  const down = Math.ceil(window.rows / step) + 1;
  const knots = new Float64Array(2 * across * down);
  for (let at = 0; at < across * down; at++) {
    const [x, y] = point(window.firstCol + (at % across) * step, window.firstRow + Math.floor(at / across) * step);
    knots[2 * at] = x;
    knots[2 * at + 1] = y;
  }
  const clampKnot = (knot: number, knotCount: number) => Math.min(Math.max(0, knot), knotCount - 2);
  return {
    isSeparable: false,
    row({ u, v, count }, pairs) {
      const knotRow = clampKnot(Math.floor((v - window.firstRow) / step), down);
      const south = (v - window.firstRow) / step - knotRow;
      const north = 1 - south;
      for (let i = 0; i < count; ) {
        const knotCol = clampKnot(Math.floor((u + i - window.firstCol) / step), across);
        const nw = 2 * (knotRow * across + knotCol);
        const sw = nw + 2 * across;
        const x = knots[nw]! * north + knots[sw]! * south;
        const y = knots[nw + 1]! * north + knots[sw + 1]! * south;
        const perUx = (knots[nw + 2]! * north + knots[sw + 2]! * south - x) / step;
        const perUy = (knots[nw + 3]! * north + knots[sw + 3]! * south - y) / step;
        const from = window.firstCol + knotCol * step;
        const last = knotCol === across - 2 ? count : Math.min(count, Math.ceil(from + step - u));
        for (const stop = Math.max(last, i + 1); i < stop; i++) {
          pairs[2 * i] = x + (u + i - from) * perUx;
          pairs[2 * i + 1] = y + (u + i - from) * perUy;
        }
      }
    },
  };
}

/** The widest power of two, up to 64, whose straight lines stay within the tolerance at places all over the window. */
function widestStep(point: PointMap, window: { firstCol: number; firstRow: number; cols: number; rows: number }, tolerance: number): number {
  for (let step = 64; step > 1; step /= 2) if (largestBend(point, window, step) <= tolerance) return step;
  return 1;
}

function largestBend(point: PointMap, window: { firstCol: number; firstRow: number; cols: number; rows: number }, step: number): number {
  let bend = 0;
  for (let place = 0; place < 25; place++) {
    const u = window.firstCol + ((place % 5) / 4) * Math.max(0, window.cols - step);
    const v = window.firstRow + (Math.floor(place / 5) / 4) * Math.max(0, window.rows - step);
    const corners = [point(u, v), point(u + step, v), point(u, v + step), point(u + step, v + step)];
    const middle = point(u + step / 2, v + step / 2);
    for (const axis of [0, 1] as const) {
      const straight = corners.reduce((sum, corner) => sum + corner[axis] / 4, 0);
      bend = Math.max(bend, Math.abs(middle[axis] - straight));
    }
  }
  return bend;
}
