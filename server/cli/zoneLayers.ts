import type { Feature } from 'geojson';
import { cleanPoints } from '../../shared/analysis/cleanPoints.ts';
import type { Cells, Grid } from '../../shared/analysis/grid.ts';
import { inverseDistance } from '../../shared/analysis/resamplePoints.ts';
import { polygonClasses, polygonMeans } from '../../shared/analysis/resamplePolygons.ts';
import { terrainOf } from '../../shared/analysis/terrain.ts';
import type { ZoningLayer } from '../../shared/analysis/zoningTypes.ts';
import { layerType } from '../../shared/catalog/layerTypes.ts';
import { sourceUnits, unitFactor } from '../../shared/catalog/sourceUnits.ts';
import type { LonLat, MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import { polygonsToUtm } from '../../shared/geo/utm.ts';
import { toUtmNear } from '../../shared/geo/utmNear.ts';
import { withSource } from '../importers/byteSource.ts';
import { sniffFormat } from '../importers/sniffFormat.ts';
import type { PictureSums, SharedPicture } from '../importers/raster/readRasterOntoGrids.ts';
import type { VectorUnderstood } from '../importers/understood.ts';
import { BadInput, weightOf, type LayerArgument } from './zoneArguments.ts';
import { readOptionsFor, requireAnswered, type Block } from './zoneFiles.ts';
import { requireFile } from './zonePaths.ts';

/** Layers of the command line onto the block's grid: pictures, maps of areas, points. Readers are loaded when needed. */

export interface ReadLayer {
  readonly layer: ZoningLayer;
  readonly notes: readonly string[];
}

interface Values {
  readonly cells: Cells;
  readonly kind: 'number' | 'class';
  readonly notes: readonly string[];
}

/** `shared`: how the rows of a picture are shared with another thread. */
export async function readLayer(block: Block, argument: LayerArgument, { layerWeights, shared }: { layerWeights: 'advise' | 'equal'; shared?: SharedPicture }): Promise<ReadLayer> {
  requireFile(argument.path, `--layer ${argument.id}`);
  const format = await formatOf(argument);
  const { cells, kind, notes } = await (format === 'geotiff' ? fromPicture(block, argument, shared) : format === 'table' ? fromTable(block, argument) : fromShapes(block, argument));
  const factor = factorOf(argument);
  const own = factor === 1 ? cells.slice() : cells.map((value) => value * factor);
  const type = layerType(kind === 'class' ? 'soilClass' : argument.type);
  leaveOutside(block.grid, own);
  refuseImpossible(argument, own);
  const weight = weightOf(argument) ?? (layerWeights === 'equal' ? 1 : null);
  return { layer: { id: argument.id, type: type.id, role: type.role, kind, cells: own, weight }, notes };
}

function leaveOutside({ share }: Grid, cells: Cells): void {
  for (let cell = 0; cell < cells.length; cell++) if (!(share[cell]! > 0)) cells[cell] = NaN;
}

/** Told by the first bytes, not by the name. */
export function formatOf({ path }: LayerArgument) {
  return withSource(path, async (source) => sniffFormat(source.read(0, Math.min(4096, source.size)), path).format);
}

function factorOf({ purpose, options }: LayerArgument): number {
  const known = sourceUnits[purpose]?.map(({ unit }) => unit);
  if (options.unit === undefined) return 1;
  if (known === undefined || !known.includes(options.unit)) throw new BadInput(`unit=${options.unit} cannot be used for ${purpose}; ${known === undefined ? 'its values are taken as they are' : `give ${known.join(', ')}`}.`);
  return unitFactor(purpose, options.unit);
}

/** A value that the layer cannot hold comes from a wrong band, unit or mark for missing values. */
function refuseImpossible({ id, type, path }: LayerArgument, cells: Cells): void {
  const { min, max, unit } = layerType(type);
  const [least, most] = [min ?? -Infinity, max ?? Infinity];
  let odd: number | undefined;
  for (let cell = 0; cell < cells.length && odd === undefined; cell++) if (cells[cell]! < least || cells[cell]! > most) odd = cells[cell];
  if (odd === undefined) return;
  throw new BadInput(`${path}: layer "${id}" has the value ${Number(odd.toPrecision(6))}${unit === '' ? '' : ` ${unit}`}, outside ${min ?? 'any'} to ${max ?? 'any'}; check band, unit (#unit=) and the mark for missing values (#nodata=).`);
}

async function fromPicture(block: Block, argument: LayerArgument, shared: SharedPicture | undefined): Promise<Values> {
  const { grid } = block;
  const { options, request, warnings } = await pictureRequest(block, argument);
  const { readRasterOntoGrids } = await import('../importers/raster/readRasterOntoGrids.ts');
  const [reading] = await readRasterOntoGrids(argument.path, options, { ...request, ...(shared === undefined ? {} : { shared }) });
  const cells = argument.terrain === null ? reading!.cells : terrainOf({ elevation: reading!.cells, cols: grid.cols, cellSizeM: grid.cellSizeM })[argument.terrain === 'slope' ? 'slopeDeg' : argument.terrain];
  return { cells, kind: argument.options.as === 'classes' ? 'class' : 'number', notes: warnings.map(({ text }) => text) };
}

/** The sums of those rows of a picture that the other thread does not take. */
export async function readPictureRows(block: Block, argument: LayerArgument, taken: Int32Array): Promise<PictureSums> {
  const { options, request } = await pictureRequest(block, argument);
  const { readSharedRows } = await import('../importers/raster/readRasterOntoGrids.ts');
  return readSharedRows(argument.path, options, { ...request, taken });
}

/** What to take from a picture. Throws BadInput when the file or the options leave it open. */
async function pictureRequest({ grid, middleLonLat }: Block, argument: LayerArgument) {
  const { describeRaster } = await import('../importers/raster/describeRaster.ts');
  const options = readOptionsFor(argument.path, argument.options, middleLonLat);
  const { bands, questions, warnings } = await describeRaster(argument.path, options);
  requireAnswered(options.fileName, questions);
  const method = argument.purpose === 'elevation' ? 'surface' : argument.options.as === 'classes' ? 'nearest' : 'mean';
  const band = argument.options.band === undefined ? bands[0]!.index : Number(argument.options.band);
  if (argument.index === null && argument.options.band === undefined && bands.length > 1) {
    throw new BadInput(`${options.fileName}: it has ${bands.length} bands; say which with #band=1, or which make the index with #red=1,nir=2.`);
  }
  const quantity = argument.index === null ? ({ kind: 'band', band, method } as const) : ({ kind: 'index', index: argument.index, bands: argument.bands } as const);
  const noData = options.answers?.noData;
  return { options, warnings, request: { quantity, grids: [grid], ...(noData === undefined ? {} : { noData }) } };
}

async function fromTable({ grid, middleLonLat }: Block, argument: LayerArgument): Promise<Values> {
  const { readPoints } = await import('../importers/points/readPoints.ts');
  const options = readOptionsFor(argument.path, argument.options, middleLonLat);
  const { questions, warnings, numbers, pointsLonLat } = await readPoints(argument.path, options);
  requireAnswered(options.fileName, questions);
  const value = numbers.get(argument.options.value ?? '');
  if (value === undefined)
    throw new BadInput(
      `${options.fileName}: ${argument.options.value === undefined ? 'it is not said which column holds the value' : `it has no column "${argument.options.value}" of numbers`}; give #value= one of ${[...numbers.keys()].join(', ')}.`,
    );
  const points = await spread(grid, { lonLat: pointsLonLat, value }, argument);
  return { ...points, notes: [...warnings.map(({ text }) => text), ...points.notes] };
}

const surfaces = ['distance', 'kriging'] as const;

/**
 * A surface from the points that can be true: by inverse distance, which is quick, or with #surface=kriging as the
 * application makes it of an imported file. Throws when no point lies on the block.
 */
async function spread(grid: Grid, { lonLat, value }: { lonLat: readonly LonLat[]; value: Float64Array }, argument: LayerArgument): Promise<Values> {
  const factor = factorOf(argument);
  const { min, max, unit } = layerType(argument.type);
  const limits = { min: min === null ? null : min / factor, max: max === null ? null : max / factor };
  const { kept, setAside } = cleanPoints({ ...toUtmNear(lonLat, grid.epsg), value }, limits);
  const impossible = setAside.find(({ reason }) => reason === 'impossible')!.count;
  if (2 * impossible > value.length) {
    throw new BadInput(`${argument.path}: ${impossible} of its ${value.length} values for layer "${argument.id}" lie outside ${min ?? 'any'} to ${max ?? 'any'}${unit === '' ? '' : ` ${unit}`}; check the column and its unit (#unit=).`);
  }
  const { surface = 'distance' } = argument.options;
  if (!surfaces.some((known) => known === surface)) throw new BadInput(`--layer ${argument.id}: surface=${surface} cannot be used; give ${surfaces.join(' or ')}.`);
  const cells = surface === 'kriging' ? (await import('../../shared/analysis/surveySurface.ts')).surveySurface(grid, kept).cells : inverseDistance(grid, kept);
  if (cells.every((each) => Number.isNaN(each))) throw new BadInput(`${argument.path}: none of its ${lonLat.length} points lies within 40 m of the block; check that it is the right file and its positions.`);
  const notes = setAside.filter(({ count }) => count > 0).map(({ reason, count }) => `${count} points set aside: ${reason}.`);
  if (argument.options.surface === undefined) notes.push(`The points of ${argument.id} are spread by inverse distance, which is quick; the application uses kriging for an imported survey of a hundred places or more, as #surface=kriging does here.`);
  return { cells, kind: 'number', notes };
}

async function fromShapes({ grid, middleLonLat }: Block, argument: LayerArgument): Promise<Values> {
  const { readVectors } = await import('../importers/vector/readVectors.ts');
  const options = readOptionsFor(argument.path, argument.options, middleLonLat);
  const understood = await readVectors(argument.path, options);
  requireAnswered(options.fileName, understood.questions);
  const layer = understood.layers[0]!;
  const named = argument.options.field ?? argument.options.value;
  const field = layer.fields.find(({ name }) => name === named);
  if (field === undefined) throw new BadInput(`${options.fileName}: ${named === undefined ? 'it is not said which field holds the value' : `it has no field "${named}"`}; give #field= one of ${layer.fields.map(({ name }) => name).join(', ')}.`);
  const asClass = argument.purpose === 'soil' && (field.kind === 'text' || argument.options.as === 'classes');
  const features = repaired(understood);
  const notes = understood.warnings.map(({ text }) => text);
  const areas = features.flatMap((feature) => areaOf(feature, field.name) ?? []).map(({ polygons, value }) => ({ polygonsXY: polygonsToUtm(polygons, grid.epsg), value }));
  if (areas.length === 0) {
    const points = features.flatMap(({ geometry, properties }) => (geometry.type === 'Point' ? [{ at: geometry.coordinates as unknown as LonLat, value: numberOf(properties?.[field.name]) }] : []));
    return spread(grid, { lonLat: points.map(({ at }) => at), value: Float64Array.from(points, ({ value }) => value ?? NaN) }, argument);
  }
  if (asClass) return { ...polygonClasses(grid, areas.map(({ polygonsXY, value }) => ({ polygonsXY, value: value === null || value === '' ? null : String(value) }))), kind: 'class', notes };
  return { cells: polygonMeans(grid, areas.map(({ polygonsXY, value }) => ({ polygonsXY, value: numberOf(value) }))), kind: 'number', notes };
}

/** Shapes that crossed themselves as they were repaired. */
function repaired({ layers, repairs }: VectorUnderstood): Feature[] {
  const [layer] = layers;
  const mended = new Map(repairs.filter((repair) => repair.layer === layer!.name && repair.repaired !== null).map((repair) => [repair.feature, repair.repaired!]));
  return layer!.featuresLonLat.features.filter(({ geometry }) => geometry !== null).map((feature) => ({ ...feature, geometry: mended.get(feature.id as number) ?? feature.geometry }));
}

function areaOf({ geometry, properties }: Feature, field: string): { polygons: MultiPolygonLonLat; value: unknown } | null {
  const value: unknown = properties?.[field] ?? null;
  if (geometry.type === 'Polygon') return { polygons: [geometry.coordinates as unknown as MultiPolygonLonLat[number]], value };
  return geometry.type === 'MultiPolygon' ? { polygons: geometry.coordinates as unknown as MultiPolygonLonLat, value } : null;
}

function numberOf(value: unknown): number | null {
  const number = typeof value === 'number' ? value : typeof value === 'string' && value.trim() !== '' ? Number(value.trim().replace(',', '.')) : NaN;
  return Number.isFinite(number) ? number : null;
}
