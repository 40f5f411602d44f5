/**
 * Zones that follow the rows, so that a picker or a harvester can follow them.
 * In: zone labels of the grid's cells and the block's vines. Out: a zone per vine (whole rows, or runs of a shortest
 * length), the runs as a table, and cell labels that agree with them. Own rules; cost linear in vines and cells.
 */
import type { RowsXY } from '../geo/rowsLayout.ts';
import type { VineTable } from '../geo/vines.ts';
import { NearestPoints } from '../geo/vinesNearest.ts';
import { cellCentre, type GridFrame, type Labels } from './grid.ts';
import { cheapestZone, cutIntoRuns, membershipCosts, wrongVineCosts, type ZoneCosts } from './snapToRowsProgramme.ts';

/** Vines wrong for one border more: a run shorter than about two panels is not worth its two borders (judgement). */
export const CUT_PENALTY = 4;

export type SnapMode = 'wholeRow' | 'partRow';

export interface SnapOptions {
  readonly mode: SnapMode;
  /** Shortest run along a row in metres; part rows only. Default 20 m (judgement: about what is worth stopping for). */
  readonly shortestRunM?: number;
  /** Wrong vines that one more cut must save; part rows only. Default 3 (judgement). */
  readonly cutPenalty?: number;
  /** Membership of vine v in zone z at [v * zones + z - 1]; then doubtful vines weigh less than sure ones. */
  readonly membership?: ArrayLike<number>;
}

export interface SnappedZones {
  /** Zone of each vine, in the order of the table; 0 only in a row without any labelled vine. */
  readonly vineLabels: Uint8Array;
  readonly cellLabels: Labels;
  readonly runs: readonly RowRun[];
  /** Vines whose own cell says another zone. */
  readonly wrongVines: number;
  /** Changes of zone along the rows. */
  readonly cuts: number;
}

/** Vines of one row, from ordinal to ordinal, in one zone: the table a foreman can use. */
export interface RowRun {
  readonly rowIndex: number;
  readonly fromOrdinal: number;
  readonly toOrdinal: number;
  readonly label: number;
}

export interface SnapInput {
  readonly grid: GridFrame;
  readonly labels: Labels;
  readonly rows: RowsXY;
  readonly vines: VineTable;
}

export function snapToRows(input: SnapInput, options: SnapOptions): SnappedZones {
  const { grid, labels, vines } = input;
  const own = labelVines(grid, labels, vines);
  const costs = blockCosts(own, options.membership);
  const vineLabels = options.mode === 'wholeRow' ? wholeRows(own, costs, vines) : partRows(own, costs, { ...input, options });
  let wrongVines = 0;
  own.forEach((label, vine) => {
    if (label !== 0 && label !== vineLabels[vine]) wrongVines++;
  });
  const runs = rowRuns(vines, vineLabels);
  const rowsWithVines = new Set(runs.map(({ rowIndex }) => rowIndex)).size;
  return { vineLabels, cellLabels: cellsFromVines(input, vineLabels), runs, wrongVines, cuts: runs.length - rowsWithVines };
}

/**
 * Label of each vine's cell; where that has none, of the nearest labelled cell centre within two cells (ties: lower row,
 * then lower column), else 0.
 */
export function labelVines(grid: GridFrame, labels: Labels, vines: Pick<VineTable, 'x' | 'y'>): Uint8Array {
  return Uint8Array.from(vines.x, (x, vine) => labelAt(grid, labels, { x, y: vines.y[vine]! }));
}

/** The vines of a zoning as runs along the rows, in order of row and vine. */
export function rowRuns(vines: VineTable, vineLabels: ArrayLike<number>): RowRun[] {
  const runs: RowRun[] = [];
  for (let vine = 0; vine < vines.count; vine++) {
    const rowIndex = vines.row[vine]!;
    const ordinal = vines.ordinal[vine]!;
    const label = vineLabels[vine]!;
    const open = runs.at(-1);
    if (open !== undefined && open.rowIndex === rowIndex && open.label === label) runs[runs.length - 1] = { ...open, toOrdinal: ordinal };
    else runs.push({ rowIndex, fromOrdinal: ordinal, toOrdinal: ordinal, label });
  }
  return runs;
}

function labelAt(grid: GridFrame, labels: Labels, at: { x: number; y: number }): number {
  const col = Math.floor((at.x - grid.x0) / grid.cellSizeM);
  const row = Math.floor((grid.y0 - at.y) / grid.cellSizeM);
  const own = row >= 0 && row < grid.rows && col >= 0 && col < grid.cols ? labels[row * grid.cols + col]! : 0;
  if (own !== 0) return own;
  let best = 0;
  let bestSquare = (2 * grid.cellSizeM) ** 2 * (1 + 1e-9) + 1e-9;
  for (let nearRow = Math.max(0, row - 3); nearRow <= Math.min(grid.rows - 1, row + 3); nearRow++) {
    for (let nearCol = Math.max(0, col - 3); nearCol <= Math.min(grid.cols - 1, col + 3); nearCol++) {
      const cell = nearRow * grid.cols + nearCol;
      if (labels[cell] === 0) continue;
      const [x, y] = cellCentre(grid, cell);
      const square = (x - at.x) ** 2 + (y - at.y) ** 2;
      if (square < bestSquare - 1e-9) [best, bestSquare] = [labels[cell]!, square];
    }
  }
  return best;
}

type VineRange = [from: number, to: number];

function wholeRows(own: Uint8Array, costs: ZoneCosts, vines: VineTable): Uint8Array {
  const out = new Uint8Array(own.length);
  for (let row = 0; row + 1 < vines.rowStart.length; row++) {
    const range: VineRange = [vines.rowStart[row]!, vines.rowStart[row + 1]!];
    if (hasLabel(own, range)) out.fill(cheapestZone(costsOf(costs, range)), ...range);
  }
  return out;
}

function partRows(own: Uint8Array, costs: ZoneCosts, { rows, vines, options }: SnapInput & { options: SnapOptions }): Uint8Array {
  const out = new Uint8Array(own.length);
  const { shortestRunM = 20, cutPenalty = 3 } = options;
  rows.rows.flatMap((row) => row.pieces).forEach((piece, index) => {
    const range: VineRange = [vines.pieceStart[index]!, vines.pieceStart[index + 1]!];
    if (!hasLabel(own, range)) return;
    const shortestRun = Math.ceil(shortestRunM / piece.stepM - 1e-6);
    out.set(cutIntoRuns(costsOf(costs, range), { cutPenalty, shortestRun }), range[0]);
  });
  return out;
}

function hasLabel(own: Uint8Array, [from, to]: VineRange): boolean {
  return own.subarray(from, to).some((label) => label !== 0);
}

function blockCosts(own: Uint8Array, membership: ArrayLike<number> | undefined): ZoneCosts {
  if (membership !== undefined) return membershipCosts(membership, membership.length / own.length);
  return wrongVineCosts(own, own.reduce((most, label) => Math.max(most, label), 1));
}

function costsOf({ zoneCount, cost }: ZoneCosts, [from, to]: VineRange): ZoneCosts {
  return { vineCount: to - from, zoneCount, cost: cost.subarray(from * zoneCount, to * zoneCount) };
}

/** Each labelled cell takes the zone of the vine nearest to its centre, so borders lie half-way between rows. */
function cellsFromVines({ grid, labels, vines }: SnapInput, vineLabels: Uint8Array): Labels {
  const near = new NearestPoints(vines.x, vines.y);
  return labels.map((label, cell) => {
    if (label === 0) return 0;
    const [x, y] = cellCentre(grid, cell);
    const vine = near.nearest(x, y);
    return vine < 0 || vineLabels[vine] === 0 ? label : vineLabels[vine]!;
  });
}
