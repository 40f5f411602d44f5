import type { Feature, Geometry } from 'geojson';
import { defineGrid, type Cells, type Grid } from '../../shared/analysis/grid.ts';
import { polygonClasses, polygonMeans, type ValuedPolygons } from '../../shared/analysis/resamplePolygons.ts';
import { layerType } from '../../shared/catalog/layerTypes.ts';
import { unitFactor } from '../../shared/catalog/sourceUnits.ts';
import type { LayerClass } from '../../shared/contracts/layers.ts';
import type { LonLat, MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import { polygonsToUtm } from '../../shared/geo/utm.ts';
import { ImportProblem } from '../importers/importProblem.ts';
import type { VectorUnderstood } from '../importers/understood.ts';
import type { PlaceInput, PlacedLayer } from './placed.ts';
import { placePoints } from './placePoints.ts';
import { factsFromAnswers, placeOnBlocks } from './placeRaster.ts';

const mostClasses = 60;

/** A layer from areas or points with an attribute, such as a soil map. Areas that crossed themselves are used as repaired; those too tangled for it are left out. */
export async function placeShapes(input: PlaceInput, understood: VectorUnderstood): Promise<PlacedLayer[]> {
  const { source } = input;
  const layer = understood.layers.find((each) => each.name === source.answers.sourceLayer) ?? understood.layers[0]!;
  const repaired = new Map(understood.repairs.filter((repair) => repair.layer === layer.name).map((repair) => [repair.feature, repair.repaired]));
  const features = layer.featuresLonLat.features.flatMap((feature): Feature[] => {
    const mended = repaired.get(feature.id as number);
    return mended === null ? [] : [{ ...feature, geometry: (mended ?? feature.geometry) as Geometry }];
  });
  const field = layer.fields.find((each) => each.name === source.answers.attribute)!;
  const asClasses = source.answers.purpose === 'soil' && (field.kind === 'text' || source.answers.soilAs === 'classes');
  const areas = features.flatMap((feature) => areasOf(feature, field.name) ?? []);
  if (areas.length === 0) return placePoints(input, pointsOf(features, field.name), { name: field.name, reference: understood.reference?.name ?? null });
  return [asClasses ? classLayer(input, areas, { field: field.name, understood }) : numberLayer(input, areas, { field: field.name, understood })];
}

interface ValuedArea {
  polygons: MultiPolygonLonLat;
  value: unknown;
}

function areasOf({ geometry, properties }: Feature, field: string): ValuedArea | null {
  if (geometry.type === 'Polygon') return { polygons: [geometry.coordinates as unknown as MultiPolygonLonLat[number]], value: properties?.[field] };
  return geometry.type === 'MultiPolygon' ? { polygons: geometry.coordinates as unknown as MultiPolygonLonLat, value: properties?.[field] } : null;
}

function pointsOf(features: readonly Feature[], field: string): { lonLat: LonLat[]; value: Float64Array } {
  const points = features.flatMap(({ geometry, properties }) => (geometry.type === 'Point' ? [{ at: geometry.coordinates as unknown as LonLat, value: numberOf(properties?.[field]) }] : []));
  return { lonLat: points.map((point) => point.at), value: Float64Array.from(points, (point) => point.value ?? NaN) };
}

interface Context {
  field: string;
  understood: VectorUnderstood;
}

function numberLayer(input: PlaceInput, areas: readonly ValuedArea[], { field, understood }: Context): PlacedLayer {
  const { purpose, unit } = input.source.answers;
  const factor = unitFactor(purpose!, unit);
  const type = purpose === 'soil' ? 'soilNumber' : purpose!;
  const cellsOf = (grid: Grid) => polygonMeans(grid, onGrid(grid, areas).map(({ polygonsXY, value }) => ({ polygonsXY, value: scaled(numberOf(value), factor) })));
  return layer(input, { type, cellsOf, classes: null, field, understood });
}

function classLayer(input: PlaceInput, areas: readonly ValuedArea[], { field, understood }: Context): PlacedLayer {
  const named = areas.map(({ polygons, value }) => ({ polygons, value: value === null || value === undefined || value === '' ? null : String(value).trim().slice(0, 80) }));
  const names = [...new Set(named.flatMap(({ value }) => value ?? []))].sort();
  if (names.length > mostClasses) {
    throw new ImportProblem({
      code: 'bad-request',
      fact: `The field ${field} has ${names.length} different classes; ${mostClasses} is the most.`,
      remedy: 'Choose another field, or take it as numbers.',
      params: { why: 'many-classes', field, classes: names.length, most: mostClasses },
      file: input.source.fileName,
    });
  }
  const cellsOf = (grid: Grid) => polygonClasses(grid, onGrid(grid, named) as ValuedPolygons<string>[]).cells;
  return layer(input, { type: 'soilClass', cellsOf, classes: names.map((name, value) => ({ value, name, colour: null })), field, understood });
}

/** All areas go to every grid, so that a class has the same number on each block. */
function onGrid<Value>(grid: Grid, areas: readonly { polygons: MultiPolygonLonLat; value: Value }[]): { polygonsXY: ReturnType<typeof polygonsToUtm>; value: Value }[] {
  return areas.map(({ polygons, value }) => ({ polygonsXY: polygonsToUtm(polygons, grid.epsg), value }));
}

function layer({ source, blocks }: PlaceInput, made: Context & { type: string; cellsOf: (grid: Grid) => Cells; classes: LayerClass[] | null }): PlacedLayer {
  const { answers } = source;
  const grids = blocks.map((block) => defineGrid(block.boundary, block.cellSizeM));
  const placed = placeOnBlocks({ blocks, grids, cells: grids.map(made.cellsOf) }, (block) => ({
    ...factsFromAnswers(answers, block),
    type: made.type,
    index: answers.holds === undefined || answers.holds === 'other' ? null : answers.holds,
    pixelSizeM: null,
    pointCount: null,
  }));
  const unit = made.type === 'soilNumber' ? (answers.unit ?? '') : layerType(made.type).unit;
  return { type: made.type, derivedFrom: null, unit, value: made.field, classes: made.classes, pixelSizeM: null, reference: made.understood.reference?.name ?? null, blocks: placed };
}

function numberOf(value: unknown): number | null {
  if (typeof value === 'number') return Number.isFinite(value) ? value : null;
  if (typeof value !== 'string' || value.trim() === '') return null;
  const read = Number(value.trim().replace(',', '.'));
  return Number.isFinite(read) ? read : null;
}

function scaled(value: number | null, factor: number): number | null {
  return value === null ? null : value * factor;
}
