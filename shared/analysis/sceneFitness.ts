/**
 * Cloud and shadow in a picture of several bands, from its own band means on the cells of one block. A cloud is bright in
 * visible and near-infrared light at once, a shadow dark in both; a vigorous canopy is dark in one and bright in the other,
 * and bare soil is bright in visible light alone. The limits are multiples of the block's medians and our own judgement;
 * thin haze passes them. In: band means. Out: cells of each, patches too small to matter left out.
 */
import type { BandName } from './indices.ts';
import type { Cells, Grid } from './grid.ts';
import { quantilesOf } from './quantile.ts';
import { valuesInside } from './grid.ts';

export type BandMeans = Partial<Record<BandName, Cells>>;

export interface SceneMarks {
  readonly cloud: Uint8Array;
  readonly shadow: Uint8Array;
}

const CLOUD_VISIBLE = 2;
const CLOUD_INFRARED = 1.25;
const SHADOW_VISIBLE = 0.7;
const SHADOW_INFRARED = 0.6;
/** A patch smaller than this changes no zone. */
const LEAST_PATCH_M2 = 100;

/** Null where the bands do not tell: no near infrared, or no visible light. */
export function sceneMarks(grid: Grid, { nir, red, green }: BandMeans): SceneMarks | null {
  const visible = red ?? green;
  if (nir === undefined || visible === undefined) return null;
  const [inVisible, inInfrared] = [medianInside(grid, visible), medianInside(grid, nir)];
  if (!(inVisible > 0) || !(inInfrared > 0)) return null;
  const where = (test: (visibleTimes: number, infraredTimes: number) => boolean) =>
    largePatches(grid, grid.share.map((share, cell) => (share > 0 && test(visible[cell]! / inVisible, nir[cell]! / inInfrared) ? 1 : 0)));
  return {
    cloud: where((visibleTimes, infraredTimes) => visibleTimes >= CLOUD_VISIBLE && infraredTimes >= CLOUD_INFRARED),
    shadow: where((visibleTimes, infraredTimes) => visibleTimes <= SHADOW_VISIBLE && infraredTimes <= SHADOW_INFRARED),
  };
}

function medianInside(grid: Grid, cells: Cells): number {
  const values = valuesInside(grid, cells);
  return values.length === 0 ? NaN : quantilesOf(values, [0.5])[0]!;
}

/** The marks without patches (joined by sides) below the least area. */
function largePatches(grid: Grid, marks: ArrayLike<number>): Uint8Array {
  const { cols, cellSizeM } = grid;
  const kept = new Uint8Array(marks.length);
  const seen = new Uint8Array(marks.length);
  for (let start = 0; start < marks.length; start++) {
    if (marks[start] !== 1 || seen[start] === 1) continue;
    const patch = [start];
    seen[start] = 1;
    for (let at = 0; at < patch.length; at++) {
      const cell = patch[at]!;
      const col = cell % cols;
      for (const [next, isThere] of [[cell - 1, col > 0], [cell + 1, col < cols - 1], [cell - cols, cell >= cols], [cell + cols, cell + cols < marks.length]] as const) {
        if (!isThere || marks[next] !== 1 || seen[next] === 1) continue;
        seen[next] = 1;
        patch.push(next);
      }
    }
    if (patch.length * cellSizeM * cellSizeM >= LEAST_PATCH_M2) for (const cell of patch) kept[cell] = 1;
  }
  return kept;
}
