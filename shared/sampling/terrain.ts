import type { GridFrame } from '../analysis/grid.ts';
import type { PaceChoices } from '../contracts/planChoices.ts';
import type { XY } from '../geo/coordinates.ts';
import { USUAL_PACE, type PacedGround } from './walkTime.ts';

/** Elevation in metres on a block's cells, NaN where unknown. */
export interface Terrain {
  readonly grid: GridFrame;
  readonly cells: Float32Array;
}

/** Ground to walk on at the chosen speed: slower on slopes in the proportions chosen, else of `USUAL_PACE`, where elevation is known and slopes count. */
export function pacedGround({ kmPerHour, onSlopes, slopeSpeeds }: PaceChoices, terrain: Terrain | null): PacedGround {
  const levelMS = kmPerHour / 3.6;
  const times = levelMS / USUAL_PACE[0]!.speedMS;
  const pace = USUAL_PACE.map(({ belowPercent, speedMS }, i) => ({ belowPercent, speedMS: slopeSpeeds && i > 0 ? levelMS * slopeSpeeds[i - 1]! : speedMS * times }));
  return { pace, ...(onSlopes && terrain ? { elevationM: (xy: XY) => elevationAt(terrain, xy) } : {}) };
}

/** Between the centres of the four cells around (bilinear), of those that are known; NaN where none is. */
export function elevationAt({ grid, cells }: Terrain, [x, y]: XY): number {
  const u = (x - grid.x0) / grid.cellSizeM - 0.5;
  const v = (grid.y0 - y) / grid.cellSizeM - 0.5;
  const [col, row] = [Math.floor(u), Math.floor(v)];
  let [sum, weights] = [0, 0];
  for (const [dc, dr] of [[0, 0], [1, 0], [0, 1], [1, 1]] as const) {
    const [c, r] = [col + dc, row + dr];
    if (c < 0 || r < 0 || c >= grid.cols || r >= grid.rows) continue;
    const metres = cells[r * grid.cols + c]!;
    const weight = (dc === 1 ? u - col : 1 - (u - col)) * (dr === 1 ? v - row : 1 - (v - row));
    if (Number.isNaN(metres)) continue;
    sum += weight * metres;
    weights += weight;
  }
  return weights > 0 ? sum / weights : Number.NaN;
}
