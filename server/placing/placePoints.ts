import { cleanPoints } from '../../shared/analysis/cleanPoints.ts';
import { cellAt, defineGrid, type Grid } from '../../shared/analysis/grid.ts';
import { inverseDistance, type ValuedPoints } from '../../shared/analysis/resamplePoints.ts';
import { layerType } from '../../shared/catalog/layerTypes.ts';
import { unitFactor } from '../../shared/catalog/sourceUnits.ts';
import type { LonLat } from '../../shared/geo/coordinates.ts';
import { toUtm } from '../../shared/geo/utm.ts';
import type { PlaceInput, PlacedLayer } from './placed.ts';
import { placeOnBlocks } from './placeRaster.ts';

/** Cells farther than this from every point stay empty: beyond it a reading says nothing of the ground (judgement). */
const reachM = 40;

export interface NamedValue {
  /** Column or field that holds the values. */
  name: string;
  reference: string | null;
}

/** A layer from points with a value, by inverse distance to the nearest twelve within reach (Shepard 1968). */
export function placePoints({ source, blocks }: PlaceInput, points: { lonLat: readonly LonLat[]; value: Float64Array }, { name, reference }: NamedValue): PlacedLayer[] {
  const { answers } = source;
  const type = answers.purpose === 'soil' ? 'soilNumber' : answers.purpose!;
  const factor = unitFactor(answers.purpose!, answers.unit);
  const value = points.value.map((each) => each * factor);
  const grids = blocks.map((block) => defineGrid(block.boundary, block.cellSizeM));
  const cleaned = grids.map((grid) => cleanPoints(near(grid, points.lonLat, value), layerType(type)));
  const placed = placeOnBlocks({ blocks, grids, cells: grids.map((grid, at) => inverseDistance(grid, cleaned[at]!.kept, { reachM })) }, (block, at) => ({
    type,
    index: answers.holds === undefined || answers.holds === 'other' ? null : answers.holds,
    measuredOn: answers.capturedOn ?? null,
    pixelSizeM: null,
    rowSpacingM: block.rowSpacingM,
    alleys: null,
    steelTrellis: answers.steelTrellis ?? null,
    pointCount: insideCount(grids[at]!, cleaned[at]!.kept),
  }));
  const noted = placed.map((block) => {
    const { setAside } = cleaned[blocks.findIndex((each) => each.id === block.blockId)]!;
    const removed = setAside.filter(({ count }) => count > 0).map(({ reason, count }) => ({ code: `pointsSetAside.${reason}`, severity: 'note' as const, params: { count } }));
    return { ...block, findings: [...block.findings, ...removed] };
  });
  const unit = type === 'soilNumber' ? (answers.unit ?? '') : layerType(type).unit;
  return [{ type, derivedFrom: null, unit, value: name, classes: null, pixelSizeM: null, reference, blocks: noted }];
}

/** Points within reach of a grid, in its metres. */
function near(grid: Grid, lonLat: readonly LonLat[], value: Float64Array): ValuedPoints {
  const [x, y, kept]: [number[], number[], number[]] = [[], [], []];
  lonLat.forEach((position, at) => {
    const [east, north] = toUtm(position, grid.epsg);
    const isNear = east > grid.x0 - reachM && east < grid.x0 + grid.cols * grid.cellSizeM + reachM && north < grid.y0 + reachM && north > grid.y0 - grid.rows * grid.cellSizeM - reachM;
    if (!isNear) return;
    x.push(east);
    y.push(north);
    kept.push(value[at]!);
  });
  return { x: Float64Array.from(x), y: Float64Array.from(y), value: Float64Array.from(kept) };
}

function insideCount(grid: Grid, points: ValuedPoints): number {
  let count = 0;
  for (let point = 0; point < points.x.length; point++) {
    const cell = cellAt(grid, [points.x[point]!, points.y[point]!]);
    if (cell >= 0 && grid.inside[cell] === 1) count += 1;
  }
  return count;
}
