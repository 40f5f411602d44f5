import type { Cells, Grid } from '../../shared/analysis/grid.ts';
import { majorityFiltered } from '../../shared/analysis/labels.ts';
import { polygonise } from '../../shared/analysis/polygonise.ts';
import { rankStability } from '../../shared/analysis/rankStability.ts';
import { smooth } from '../../shared/analysis/smooth.ts';
import type { MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';

export interface StableGroundInput {
  grid: Grid;
  /** One kind of layer, an array a season. */
  seasons: Cells[];
  /** As in the zoning, so that rows and single vines do not pass for change; 0 for layers that do not show rows. */
  smoothingM: number;
}

export interface StableGround {
  cells: number;
  steady: number;
  moving: number;
  chance: number;
  /** Kinds of ground that there are, 1 steady … 3 as chance. */
  areas: { ground: number; polygonsLonLat: MultiPolygonLonLat }[];
}

/** Ground that a season has no value of is drawn as none of the three. */
const unknown = 4;

/** Ground that keeps its place from season to season, counted and drawn; null when too little is common to compare. */
export function stableGround({ grid, seasons, smoothingM }: StableGroundInput): StableGround | null {
  const inBlock = seasons.map((cells) => (smoothingM > 0 ? smooth(grid, cells, { sigmaM: smoothingM, fillMissing: false }) : cells).map((value, cell) => (grid.inside[cell] === 1 ? value : NaN)));
  const found = rankStability(inBlock);
  if (found === null) return null;
  // Single cells are left out of the drawing, not of the count: specks cannot be read.
  const drawn = polygonise(grid, majorityFiltered(found.ground.map((ground, cell) => (ground === 0 && grid.inside[cell] === 1 ? unknown : ground)), grid.cols));
  const areas = drawn.filter(({ zone }) => zone !== unknown).map(({ zone, polygonsLonLat }) => ({ ground: zone, polygonsLonLat }));
  return { cells: found.cells, ...found.shares, areas };
}
