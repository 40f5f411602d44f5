/**
 * k-means for two to six zones on the cells that have every layer, and a zone and a doubt for every cell of the block.
 * The fit uses a fixed sample of cells (10 000 change the agreement with a fit on all by less than 0.003); every number of
 * zones has its own random stream, so that three zones are the same whether asked for or advised.
 */

import type { Cells, Grid } from './grid.ts';
import { fitKMeans } from './kmeans.ts';
import { nearestWithDoubt } from './kmeansNearest.ts';
import { sampleIndices, selectPoints, type PointTable } from './kmeansPoints.ts';
import { principalComponents } from './principal.ts';
import { seededRandom, type Random } from './random.ts';
import { commonCells } from './verdictField.ts';
import { MOST_ZONES } from './verdictGap.ts';

/** Cells that the fit is made on. */
const FIT_CELLS = 10_000;
/** With more cells than the first the many starts run on a part of them. */
const SEARCH_ALL_CELLS = 3000;
const SEARCH_CELLS = 1000;

/** A random stream of its own for each use of the seed, so that one stage does not shift the numbers of the next. */
export function streamOf(seed: number, use: number): Random {
  return seededRandom((Math.imul(seed + 1, 0x9e3779b1) ^ Math.imul(use + 1, 0x85ebca6b)) >>> 0);
}

export interface FeatureTable {
  /** Cells inside with every column, and their points. */
  readonly cells: Int32Array;
  readonly points: PointTable;
  /** Cells inside that miss a column. */
  readonly incomplete: Int32Array;
  readonly columns: readonly Float32Array[];
  readonly componentShares: readonly number[] | null;
}

export function featureTable(grid: Grid, columns: readonly Float32Array[], usePrincipalComponents: boolean): FeatureTable {
  const isComplete = commonCells(grid, columns);
  const cells = cellsWhere(isComplete, isComplete, 1);
  const values = new Float64Array(cells.length * columns.length);
  columns.forEach((column, f) => {
    for (let point = 0, at = f; point < cells.length; point++, at += columns.length) values[at] = column[cells[point]!]!;
  });
  const points = { values, count: cells.length, dimensions: columns.length };
  const rest = { cells, incomplete: cellsWhere(grid.inside, isComplete, 0), columns };
  if (!usePrincipalComponents || columns.length < 2) return { ...rest, points, componentShares: null };
  const components = principalComponents(points);
  return { ...rest, points: components.scores, componentShares: components.shares };
}

/** Cells inside whose mark is the one wanted, ascending. */
function cellsWhere(inside: Uint8Array, marks: Uint8Array, wanted: number): Int32Array {
  const found = new Int32Array(inside.length);
  let count = 0;
  for (let cell = 0; cell < inside.length; cell++) if (inside[cell] === 1 && marks[cell] === wanted) found[count++] = cell;
  return found.slice(0, count);
}

export interface ZoneFit {
  readonly k: number;
  /** In the space of the points. */
  readonly centres: Float64Array;
  /** Zone 0…k−1 of every point of the table. */
  readonly labels: Uint8Array;
  /** Sum of squares of all points to their centre. */
  readonly inertia: number;
  /** Squared distance to the own centre over that to the next: the ratio of the two largest fuzzy memberships. */
  readonly doubt: Float32Array;
}

/** One fit for each k = 1…6; each also starts from the zones of the one before. */
export function fitZones({ points }: FeatureTable, seed: number): ZoneFit[] {
  const sample = selectPoints(points, sampleIndices(points.count, FIT_CELLS, streamOf(seed, 0)));
  const searchCount = sample.count > SEARCH_ALL_CELLS ? SEARCH_CELLS : sample.count;
  const fits: ZoneFit[] = [];
  for (let k = 1; k <= MOST_ZONES; k++) {
    const from = fits.at(-1)?.centres;
    const { centres } = fitKMeans(sample, { k, random: streamOf(seed, k), restarts: 25, searchCount, ...(from === undefined ? {} : { from }) });
    fits.push({ k, centres, ...nearestWithDoubt(points, centres) });
  }
  return fits;
}

export interface CellZones {
  /** Zone 1…k a cell, 0 outside. */
  readonly labels: Uint8Array;
  readonly doubt: Cells;
}

/**
 * Zones and doubt on the grid. A cell without any layer takes the zone of the nearest cell that has one; one that misses
 * some layers is judged by those it has, against the zones' means of the columns. Both count as wholly doubtful.
 */
export function zonesOnGrid(grid: Grid, table: FeatureTable, fit: ZoneFit): CellZones {
  const labels = new Uint8Array(grid.inside.length);
  const doubt = new Float32Array(grid.inside.length).fill(NaN);
  putOnCells(table.cells, fit, { labels, doubt });
  if (table.incomplete.length === 0) return { labels, doubt };
  const means = columnMeans(table, fit);
  for (const cell of table.incomplete) {
    doubt[cell] = 1;
    labels[cell] = nearestByKnown(table.columns, means, { cell, k: fit.k });
  }
  const isComplete = table.incomplete.every((cell) => labels[cell]! > 0);
  return { labels: isComplete ? labels : withGapsFilled(grid, labels), doubt };
}

/** A function of its own, as every loop over all cells that runs once for each number of zones: see DEVELOPERS.md, zoning. */
function putOnCells(cells: Int32Array, fit: ZoneFit, { labels, doubt }: CellZones): void {
  for (let point = 0; point < cells.length; point++) {
    const cell = cells[point]!;
    labels[cell] = fit.labels[point]! + 1;
    doubt[cell] = fit.doubt[point]!;
  }
}

function columnMeans({ cells, columns }: FeatureTable, { labels, k }: ZoneFit): Float64Array[] {
  const sizes = new Float64Array(k);
  for (let point = 0; point < labels.length; point++) sizes[labels[point]!]! += 1;
  return columns.map((column) => sumsByZone(column, cells, labels, k).map((sum, zone) => sum / sizes[zone]!));
}

function sumsByZone(column: Float32Array, cells: Int32Array, labels: Uint8Array, k: number): Float64Array {
  const sums = new Float64Array(k);
  for (let point = 0; point < cells.length; point++) sums[labels[point]!]! += column[cells[point]!]!;
  return sums;
}

/** Zone 1…k by the columns the cell has; 0 when it has none. */
function nearestByKnown(columns: readonly Float32Array[], means: readonly Float64Array[], { cell, k }: { cell: number; k: number }): number {
  const known = columns.flatMap((column, f) => (Number.isNaN(column[cell]!) ? [] : [f]));
  if (known.length === 0) return 0;
  let nearest = 0;
  let best = Infinity;
  for (let zone = 0; zone < k; zone++) {
    const squared = known.reduce((sum, f) => sum + (columns[f]![cell]! - means[f]![zone]!) ** 2, 0);
    if (squared < best) {
      best = squared;
      nearest = zone + 1;
    }
  }
  return nearest;
}

/** Cells inside without a zone take the zone of the nearest labelled cell, by steps to the four sides. */
export function withGapsFilled({ cols, inside }: Grid, labels: Uint8Array): Uint8Array {
  let open = Int32Array.from(inside.keys()).filter((cell) => inside[cell] === 1 && labels[cell] === 0);
  let filled = labels;
  while (open.length > 0) {
    const next = filled.slice();
    for (const cell of open) {
      const col = cell % cols;
      const west = col > 0 ? filled[cell - 1]! : 0;
      const east = col < cols - 1 ? filled[cell + 1]! : 0;
      next[cell] = west || east || (filled[cell - cols] ?? 0) || (filled[cell + cols] ?? 0);
    }
    const left = open.filter((cell) => next[cell] === 0);
    // A part of the block that no labelled cell touches at all stays one zone with its number, the first.
    if (left.length === open.length) return filled.map((label, cell) => (label === 0 && inside[cell] === 1 ? 1 : label));
    filled = next;
    open = left;
  }
  return filled;
}
