/**
 * Slope, aspect and their parts from elevation cells. In: elevation in metres on a square grid, row 0 in the north, NaN
 * where missing. Out: cells. Cost: nine reads a cell. Window, north up: a b c / d e f / g h i.
 * Edges: a missing side is continued in a straight line through the centre from the opposite side, or takes the centre's
 * height when both are missing; a missing corner is continued from its two sides. A plane keeps its slope up to the edge.
 */
import type { Cells } from './grid.ts';

/** Rates of change in the window: to the east, and to the SOUTH. */
export type Gradient = readonly [eastward: number, southward: number];

export type SlopeMethod = 'horn' | 'zevenbergenThorne';

type GradientOf = (window: Float64Array, cellSizeM: number) => Gradient;

/** Horn 1981 weighs all eight neighbours; Zevenbergen & Thorne 1987 uses the four nearest and suits smooth ground. */
const METHODS: Record<SlopeMethod, GradientOf> = {
  horn: (z, cellSizeM) => [
    (z[2]! + 2 * z[5]! + z[8]! - z[0]! - 2 * z[3]! - z[6]!) / (8 * cellSizeM),
    (z[6]! + 2 * z[7]! + z[8]! - z[0]! - 2 * z[1]! - z[2]!) / (8 * cellSizeM),
  ],
  zevenbergenThorne: (z, cellSizeM) => [(z[5]! - z[3]!) / (2 * cellSizeM), (z[7]! - z[1]!) / (2 * cellSizeM)],
};

export interface Terrain {
  readonly slopeDeg: Cells;
  /** Downhill direction, degrees clockwise from north; NaN on flat ground. A circle: never average or cluster it. */
  readonly aspectDeg: Cells;
  /** cos(aspect) · sin(slope) and sin(aspect) · sin(slope): how far the ground faces north and east, 0 on flat ground. */
  readonly northness: Cells;
  readonly eastness: Cells;
}

export interface ElevationGrid {
  readonly elevation: Cells;
  readonly cols: number;
  readonly cellSizeM: number;
}

/** Slope of a plane that rises 2 m in 10 m to the north: 11.309932°, aspect 180°. */
export function terrainOf({ elevation, cols, cellSizeM }: ElevationGrid, method: SlopeMethod = 'horn'): Terrain {
  const make = () => new Float32Array(elevation.length).fill(NaN);
  const terrain = { slopeDeg: make(), aspectDeg: make(), northness: make(), eastness: make() };
  const window = new Float64Array(9);
  for (let cell = 0; cell < elevation.length; cell++) {
    if (Number.isNaN(elevation[cell]!)) continue;
    fillWindow(window, { elevation, cols }, cell);
    const gradient = METHODS[method](window, cellSizeM);
    const [east, south] = gradient;
    const toVertical = Math.sqrt(1 + east * east + south * south);
    terrain.slopeDeg[cell] = slopeDegOf(gradient);
    terrain.aspectDeg[cell] = aspectDegOf(gradient);
    // Parts of the unit normal: the ground faces against the way it rises.
    terrain.northness[cell] = south / toVertical;
    terrain.eastness[cell] = east === 0 ? 0 : -east / toVertical;
  }
  return terrain;
}

/** Gradient of one full window of nine heights, rows from the north. */
export function gradientOf(window: readonly number[], cellSizeM: number, method: SlopeMethod = 'horn'): Gradient {
  return METHODS[method](Float64Array.from(window), cellSizeM);
}

export function slopeDegOf([east, south]: Gradient): number {
  return (Math.atan(Math.sqrt(east * east + south * south)) * 180) / Math.PI;
}

/** 90° − atan2(southward, −eastward), within 0…360. */
export function aspectDegOf([east, south]: Gradient): number {
  if (east === 0 && south === 0) return NaN;
  const degrees = 90 - (Math.atan2(south, -east) * 180) / Math.PI;
  return (degrees + 360) % 360;
}

/**
 * Topographic wetness ln(a / tan β) of upslope area per metre of contour a and slope β (Beven & Kirkby 1979); tan β is kept
 * at 0.001 or more. `wetness(100, 5)` is 7.041416.
 */
export function wetness(upslopeAreaPerM: number, slopeDeg: number): number {
  return Math.log(upslopeAreaPerM / Math.max(0.001, Math.tan((slopeDeg * Math.PI) / 180)));
}

function fillWindow(window: Float64Array, { elevation, cols }: { elevation: Cells; cols: number }, cell: number): void {
  const col = cell % cols;
  for (let at = 0, from = cell - cols - 1; at < 9; at += 3, from += cols) {
    window[at] = col === 0 ? NaN : (elevation[from] ?? NaN);
    window[at + 1] = elevation[from + 1] ?? NaN;
    window[at + 2] = col === cols - 1 ? NaN : (elevation[from + 2] ?? NaN);
  }
  let sum = 0;
  for (let at = 0; at < 9; at++) sum += window[at]!;
  if (Number.isNaN(sum)) bridgeGaps(window);
}

function bridgeGaps(window: Float64Array): void {
  const centre = window[4]!;
  for (const side of SIDES) {
    const opposite = window[8 - side]!;
    if (Number.isNaN(window[side]!)) window[side] = Number.isNaN(opposite) ? centre : 2 * centre - opposite;
  }
  for (const [corner, side, otherSide] of CORNERS) if (Number.isNaN(window[corner]!)) window[corner] = window[side]! + window[otherSide]! - centre;
}

/** Places in the window: b, d, f, h; and each corner with its two sides. */
const SIDES = [1, 3, 5, 7] as const;
const CORNERS = [
  [0, 1, 3],
  [2, 1, 5],
  [6, 7, 3],
  [8, 7, 5],
] as const;
