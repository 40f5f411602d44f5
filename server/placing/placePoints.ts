import { cleanPoints, type CleanedPoints } from '../../shared/analysis/cleanPoints.ts';
import { cellAt, defineGrid, type Grid } from '../../shared/analysis/grid.ts';
import type { ValuedPoints } from '../../shared/analysis/resamplePoints.ts';
import { surveySurface, widestReachM, type SurveySurface } from '../../shared/analysis/surveySurface.ts';
import { practicalRangeM } from '../../shared/analysis/variogramModel.ts';
import { layerType } from '../../shared/catalog/layerTypes.ts';
import { unitFactor } from '../../shared/catalog/sourceUnits.ts';
import type { AsideReading } from '../../shared/contracts/layers.ts';
import type { LonLat } from '../../shared/geo/coordinates.ts';
import { fromUtm } from '../../shared/geo/utm.ts';
import { toUtmNear, type PlacesXY } from '../../shared/geo/utmNear.ts';
import type { PlacedCells, PlaceInput, PlacedLayer } from './placed.ts';
import { factsFromAnswers, placeOnBlocks } from './placeRaster.ts';

export interface PointReadings {
  lonLat: readonly LonLat[];
  value: Float64Array;
  /** Speed of each reading where the file has a column of it. */
  speed?: Float64Array | undefined;
}

export interface NamedValue {
  /** Column or field that holds the values. */
  name: string;
  reference: string | null;
}

/** A layer from points with a value: cleaned and spread over each block by itself. */
export function placePoints({ source, blocks }: PlaceInput, points: PointReadings, { name, reference }: NamedValue): PlacedLayer[] {
  const { answers } = source;
  const type = answers.purpose === 'soil' ? 'soilNumber' : answers.purpose!;
  const factor = unitFactor(answers.purpose!, answers.unit);
  const readings = { ...points, value: points.value.map((each) => each * factor) };
  const grids = blocks.map((block) => defineGrid(block.boundary, block.cellSizeM));
  const projected = inMetres(readings.lonLat);
  const surveys = grids.map((grid): Survey => {
    const near = readingsNear(grid, readings, projected(grid.epsg));
    const taken = answers.takenBack ?? [];
    const cleaned = cleanPoints(near, { ...layerType(type), speed: near.speed, isOutside: outsideOf(grid, near), off: taken });
    return { grid, near, cleaned, surface: surveySurface(grid, cleaned.kept), taken };
  });
  const placed = placeOnBlocks({ blocks, grids, cells: surveys.map(({ surface }) => surface.cells) }, (block, at) => ({
    ...factsFromAnswers(answers, block),
    type,
    index: answers.holds === undefined || answers.holds === 'other' ? null : answers.holds,
    pixelSizeM: null,
    pointCount: insideCount(grids[at]!, surveys[at]!.cleaned.kept),
  }));
  const withSurveys = placed.map((block): PlacedCells => ({ ...block, survey: surveyRecord(surveys[blocks.findIndex((each) => each.id === block.blockId)]!) }));
  const unit = type === 'soilNumber' ? (answers.unit ?? '') : layerType(type).unit;
  return [{ type, derivedFrom: null, unit, value: name, classes: null, pixelSizeM: null, reference, blocks: withSurveys }];
}

interface Near extends ValuedPoints {
  readonly speed: Float64Array | null;
}

interface Survey {
  grid: Grid;
  near: Near;
  cleaned: CleanedPoints;
  surface: SurveySurface;
  taken: NonNullable<PlaceInput['source']['answers']['takenBack']>;
}

/** Positions by UTM zone, each projected once however many blocks lie in it. */
function inMetres(lonLat: readonly LonLat[]): (epsg: number) => PlacesXY {
  const known = new Map<number, PlacesXY>();
  return (epsg) => {
    const places = known.get(epsg) ?? toUtmNear(lonLat, epsg);
    known.set(epsg, places);
    return places;
  };
}

/** Readings within reach of a grid, in its metres and in their order. */
function readingsNear(grid: Grid, { value, speed }: PointReadings, { x, y }: PlacesXY): Near {
  const kept: number[] = [];
  const [west, east] = [grid.x0 - widestReachM, grid.x0 + grid.cols * grid.cellSizeM + widestReachM];
  const [south, north] = [grid.y0 - grid.rows * grid.cellSizeM - widestReachM, grid.y0 + widestReachM];
  for (let at = 0; at < x.length; at++) if (x[at]! > west && x[at]! < east && y[at]! > south && y[at]! < north) kept.push(at);
  const pick = (from: Float64Array) => Float64Array.from(kept, (at) => from[at]!);
  return { x: pick(x), y: pick(y), value: pick(value), speed: speed ? pick(speed) : null };
}

/** A block with readings enough of its own does not need those of the turning ground around it (judgement). */
const enoughOfItsOwn = 100;

function outsideOf(grid: Grid, near: ValuedPoints): (x: number, y: number) => boolean {
  if (insideCount(grid, near) < enoughOfItsOwn) return () => false;
  const touches = (x: number, y: number) => {
    const cell = cellAt(grid, [x, y]);
    return cell >= 0 && grid.share[cell]! > 0;
  };
  // A position is good to a metre or two: a cell next to the block still counts as the block. Most lie in it: its own cell is asked first.
  const around = [0, -1, 1].flatMap((east) => [0, -1, 1].map((north) => [east * grid.cellSizeM, north * grid.cellSizeM] as const));
  return (x, y) => !around.some(([east, north]) => touches(x + east, y + north));
}

function insideCount(grid: Grid, points: ValuedPoints): number {
  let count = 0;
  for (let point = 0; point < points.x.length; point++) {
    const cell = cellAt(grid, [points.x[point]!, points.y[point]!]);
    if (cell >= 0 && grid.inside[cell] === 1) count += 1;
  }
  return count;
}

/** More marks than this make a map slow and no clearer. */
const mostMarks = 2000;

function surveyRecord({ grid, near, cleaned, surface, taken }: Survey): NonNullable<PlacedCells['survey']> {
  const { method, places, reachM, model, bins, standardError } = surface;
  const step = Math.max(1, Math.ceil(cleaned.aside.length / mostMarks));
  const aside = cleaned.aside.filter((_, at) => at % step === 0).map(({ point, reason }): AsideReading => {
    const [lon, lat] = fromUtm([near.x[point]!, near.y[point]!], grid.epsg);
    return { lonLat: [lon, lat], reason };
  });
  return {
    method, places, reachM, standardError, aside,
    readings: cleaned.kept.x.length,
    model: model === null ? null : { ...model, rangeM: practicalRangeM(model) },
    bins: [...bins],
    setAside: cleaned.setAside.filter(({ count }) => count > 0),
    taken: [...taken],
  };
}
