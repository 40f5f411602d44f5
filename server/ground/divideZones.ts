import { cellAt, type Cells, type Grid, type Labels } from '../../shared/analysis/grid.ts';
import { rowRuns, snapToRows, type RowRun } from '../../shared/analysis/snapToRows.ts';
import type { XY } from '../../shared/geo/coordinates.ts';
import type { RowsXY } from '../../shared/geo/rowsLayout.ts';
import type { VineTable } from '../../shared/geo/vines.ts';
import { divisionsAlong, judgeParts, partMeans, type Demand, type Division, type ZoneReading } from '../../shared/sampling/divideZone.ts';

/** Shortest run of vines along a row that a divided zone gives away, in metres. */
const shortestRunM = 20;
/** Cuts of a zone, cheapest first, that are judged as they would be drawn: runs along rows may spoil the cheapest and spare the next. */
const mostDrawn = 8;

/** A zone that asks for too much, with what its measure asks and was read. */
export interface ZoneToDivide {
  zone: number;
  demand: Demand;
  readings: (ZoneReading & { vine: number })[];
}

export interface DivideZonesInput {
  grid: Grid;
  labels: Labels;
  rows: RowsXY;
  vines: VineTable;
  zoneOf: Uint8Array;
  /** Not 0 for vines that a mean speaks for; empty places and young vines are no part of a count. */
  bearing: Uint8Array;
  /** Number that the second part would take. */
  newZone: number;
  /** Layers of numbers on the cells of the grid. */
  layers: { id: string; cells: Cells }[];
  zones: ZoneToDivide[];
}

export interface DividedZone {
  zone: number;
  layerId: string;
  division: Division;
  means: readonly [number, number];
  /** What the second part takes, along the rows. */
  runs: RowRun[];
}

/** For each zone the division along one layer that asks for least, where the readings suffice to judge; a zone without one is left out. */
export function divideZones(input: DivideZonesInput): DividedZone[] {
  const { vines, grid } = input;
  const layers = input.layers.map((layer) => ({ ...layer, atVines: Float64Array.from(vines.x, (x, vine) => valueAt(grid, layer.cells, [x, vines.y[vine]!])) }));
  return input.zones.flatMap((asked) => divideZone(input, layers, asked) ?? []);
}

interface LayerOnVines {
  id: string;
  cells: Cells;
  /** Value at each vine of the table; NaN where the layer says nothing. */
  atVines: Float64Array;
}

function divideZone(input: DivideZonesInput, layers: readonly LayerOnVines[], { zone, demand, readings }: ZoneToDivide): DividedZone | null {
  const ofZone = [...input.zoneOf.keys()].filter((vine) => input.zoneOf[vine] === zone && input.bearing[vine] !== 0);
  const cuts = layers.flatMap((layer) => {
    const located = readings.flatMap((reading) => (Number.isNaN(layer.atVines[reading.vine]!) ? [] : [{ ...reading, layer: layer.atVines[reading.vine]! }]));
    const layerAtVines = ofZone.map((vine) => layer.atVines[vine]!).filter((value) => !Number.isNaN(value));
    return divisionsAlong({ ...demand, readings: located, layerAtVines }).map(({ cut, total }) => ({ layer, cut, total }));
  });
  let best: DividedZone | null = null;
  for (const { layer, cut, total } of cuts.sort((a, b) => a.total - b.total).slice(0, mostDrawn)) {
    // What follows asks for more on its own line than the best does as drawn.
    if (best !== null && best.division.total <= total) break;
    const given = vinesOfPart(input, { zone, layer, cut });
    const sides = [readings.filter(({ vine }) => given[vine] === 0), readings.filter(({ vine }) => given[vine] === 1)] as const;
    const taken = ofZone.filter((vine) => given[vine] === 1).length;
    const division = judgeParts(demand, { cut, sides, vines: [ofZone.length - taken, taken] });
    if (division !== null && (best === null || division.total < best.division.total)) best = { zone, layerId: layer.id, division, means: partMeans(sides), runs: rowRuns(input.vines, given).filter(({ label }) => label === 1) };
  }
  return best;
}

/** 1 at the vines of the second part, in runs along the rows, none shorter than a crew would stop for: promised is what is drawn, not the layer's own line. */
function vinesOfPart({ grid, labels, rows, vines, zoneOf, newZone }: DivideZonesInput, { zone, layer, cut }: { zone: number; layer: LayerOnVines; cut: number }): Uint8Array {
  const parted = new Uint8Array(labels) as Labels;
  parted.forEach((label, cell) => {
    if (label === zone && layer.cells[cell]! > cut) parted[cell] = newZone;
  });
  const { vineLabels } = snapToRows({ grid, labels: parted, rows, vines }, { mode: 'partRow', shortestRunM });
  return Uint8Array.from(vineLabels, (label, vine) => (label === newZone && zoneOf[vine] === zone ? 1 : 0));
}

function valueAt(grid: Grid, cells: Cells, xy: XY): number {
  const cell = cellAt(grid, xy);
  return cell < 0 ? Number.NaN : cells[cell]!;
}
