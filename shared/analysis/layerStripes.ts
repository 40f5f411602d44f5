/**
 * Stripes that a sensor left in a layer, for the person who decides about it: the same test as the verdict's (verdictStripes,
 * with borders told apart by verdictPlateaus), with bearing, strength, width and the cells of the higher swaths.
 * In: cells of a layer. Out: null where nothing is striped. Cost: 36 passes over the cells.
 */
import { fittedSurface, withoutSurface } from './covarianceTrend.ts';
import type { Cells, Grid } from './grid.ts';
import { quantilesOf } from './quantile.ts';
import { smooth } from './smooth.ts';
import { standardiseClipped } from './verdictField.ts';
import { arePlateaus } from './verdictPlateaus.ts';
import { stripePattern, strongestProfile, withoutStripes } from './verdictStripes.ts';

export interface SensorStripes {
  /** Compass bearing of the stripes, 0…175°. */
  readonly bearingDeg: number;
  /** Share of what a smooth surface leaves that the stripes explain, 0…1. */
  readonly share: number;
  /** Mean width of a stripe. */
  readonly widthM: number;
  /** 1 for the cells of the stripes that lie above their neighbours. */
  readonly cells: Uint8Array;
}

const STEP_M = 3;
const DEGREES_A_DIRECTION = 5;
/** Too few cells for a profile in 36 directions (judgement). */
const LEAST_CELLS = 400;
/** Stripes that explain less than this of the layer's variance move no zone (judgement). */
const LEAST_OF_LAYER = 0.02;
/** What is wider than this is ground, whatever its edge: a zone can follow it (the treads of verdictPlateaus). */
const WIDEST_M = 40;
/** Vine rows beat against the cells in fine pictures; zoning smooths them away by this much before it looks. */
const ROW_SMOOTHING_M = 3;

export function sensorStripes(grid: Grid, cells: Cells, { showsRows }: { showsRows: boolean }): SensorStripes | null {
  const looked = showsRows ? smooth(grid, cells, { sigmaM: ROW_SMOOTHING_M }) : cells;
  const mask = grid.inside.map((inside, cell) => (inside === 1 && !Number.isNaN(looked[cell]!) ? 1 : 0));
  const values = looked.filter((_, cell) => mask[cell] === 1);
  if (values.length < LEAST_CELLS) return null;
  // A few odd cells on one value everywhere: nothing is left to stand in stripes.
  const [low, high] = quantilesOf(values, [0.005, 0.995]);
  if (low === high) return null;
  const plane = { width: grid.cols, height: grid.rows, mask };
  const stepCells = Math.max(1, STEP_M / grid.cellSizeM);
  const standard = standardiseClipped(looked, mask);
  const pattern = stripePattern(plane, standard, stepCells);
  const across = { pattern, stepCells };
  if (!pattern.isStriped || pattern.strongest * pattern.residualVariance < LEAST_OF_LAYER || arePlateaus(strongestProfile(plane, standard, across), [], stepCells * grid.cellSizeM)) return null;
  const rest = withoutSurface(plane, standard, fittedSurface(plane, standard, 2));
  const widthM = meanWidth(strongestProfile(plane, rest, across).means) * stepCells * grid.cellSizeM;
  if (widthM > WIDEST_M) return null;
  const evened = withoutStripes(plane, rest, across);
  return {
    // The profile runs along the angle, the stripes square to it: an angle from east over south is their bearing from north.
    bearingDeg: pattern.shares.indexOf(pattern.strongest) * DEGREES_A_DIRECTION,
    share: pattern.strongest,
    widthM,
    cells: mask.map((inside, cell) => (inside === 1 && rest[cell]! - evened[cell]! > 0 ? 1 : 0)),
  };
}

/** Steps from one change of side to the next. */
function meanWidth(means: Float64Array): number {
  let changes = 0;
  for (let step = 1; step < means.length; step++) if (Math.sign(means[step]!) !== Math.sign(means[step - 1]!)) changes += 1;
  return means.length / (changes + 1);
}
