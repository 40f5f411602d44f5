import { existsSync, readFileSync, statSync } from 'node:fs';
import { basename } from 'node:path';
import type { Position } from 'geojson';
import { defineGrid, type Grid } from '../../shared/analysis/grid.ts';
import type { LonLat, MultiPolygonLonLat, PolygonLonLat } from '../../shared/geo/coordinates.ts';
import { readOutline } from '../../shared/geo/outline.ts';
import type { RasterReadOptions } from '../importers/raster/describeRaster.ts';
import type { ImportAnswers, ImportQuestion } from '../importers/understood.ts';
import { BadInput } from './zoneArguments.ts';
import { requireFile } from './zonePaths.ts';

/** What every file of the command line goes through: what lies beside it, what does it leave open. */

/** Read options from the options of a layer, with the world file and projection file that lie beside a picture. */
export function readOptionsFor(path: string, options: Readonly<Record<string, string>>, nearLonLat: LonLat | null): RasterReadOptions {
  const { epsg, nodata, lat, lon, layer } = options;
  const answers: ImportAnswers = {
    // A file that lies elsewhere is told so, with the distance, when it is laid on the block.
    placement: 'keep',
    ...(epsg === undefined ? {} : { epsg: numberOption('epsg', epsg) }),
    ...(nodata === undefined ? {} : { noData: nodata === 'none' ? null : numberOption('nodata', nodata) }),
    ...(layer === undefined ? {} : { layer }),
    ...(lon === undefined ? {} : { xColumn: lon }),
    ...(lat === undefined ? {} : { yColumn: lat }),
  };
  const beside = (endings: readonly string[]) => endings.map((ending) => path.replace(/\.[^.]*$/, ending)).find((companion) => companion !== path && existsSync(companion));
  const [world, projection] = [beside(['.tfw', '.tifw', '.wld']), beside(['.prj'])];
  return {
    fileName: basename(path),
    estateLonLat: nearLonLat,
    answers,
    worldFileText: world === undefined ? null : readFileSync(world, 'utf8'),
    projectionFileText: projection === undefined ? null : readFileSync(projection, 'utf8'),
  };
}

function numberOption(name: string, value: string): number {
  const number = Number(value);
  if (value === '' || !Number.isFinite(number)) throw new BadInput(`${name}=${value} cannot be used; give a number.`);
  return number;
}

const answeredBy: Partial<Record<ImportQuestion['code'], string>> = {
  'reference-system': '#epsg=CODE',
  'no-data': '#nodata=NUMBER or #nodata=none',
  layer: '#layer=NAME',
  columns: '#lat=COLUMN,lon=COLUMN',
};

/** A question that the file leaves open becomes one line saying which option answers it. */
export function requireAnswered(fileName: string, questions: readonly ImportQuestion[]): void {
  const [question] = questions;
  if (question === undefined) return;
  const choices = question.choices.slice(0, 6).map(({ value }) => value).join(', ');
  const how = answeredBy[question.code];
  throw new BadInput(`${fileName}: ${question.text}${choices === '' ? '' : ` Choices: ${choices}.`}${how === undefined ? ' Put it in order and export it again.' : ` Answer with ${how}.`}`);
}

const PLAIN_BYTES = 4e6;

export interface Block {
  readonly grid: Grid;
  readonly middleLonLat: LonLat;
}

/** The block's grid from the areas in a file; several areas are parts of one block. */
export async function readBlock(path: string, cellSizeM: number): Promise<Block> {
  requireFile(path, '--block');
  const areas = plainAreas(path) ?? (await areasByReader(path));
  const asDrawn = readOutline({ type: 'MultiPolygon', coordinates: areas as unknown as MultiPolygonLonLat });
  const polygons = asDrawn.polygons.length < 2 ? asDrawn.polygons : readOutline({ type: 'MultiPolygon', coordinates: await united(asDrawn.polygons) }).polygons;
  return { grid: defineGrid(polygons, cellSizeM), middleLonLat: polygons[0]![0]![0]! };
}

/** Areas that touch or overlap become one: neighbours with a border between them are no outline to walk around. */
async function united(areas: MultiPolygonLonLat): Promise<Position[][][]> {
  // Loaded only when needed: it is large, and most blocks are one area.
  const { featureCollection, polygon, union } = await import('@turf/turf');
  const whole = union(featureCollection(areas.map((rings) => polygon(rings.map((ring) => ring.map(([lon, lat]) => [lon, lat]))))))!.geometry;
  return whole.type === 'Polygon' ? [whole.coordinates] : whole.coordinates;
}

/** Areas of a plain GeoJSON file, which needs no reader; null for anything else, which then gets the full treatment. */
function plainAreas(path: string): PolygonLonLat[] | null {
  if (!/\.(geo)?json$/i.test(path) || statSync(path).size > PLAIN_BYTES) return null;
  try {
    const json = JSON.parse(readFileSync(path, 'utf8')) as { crs?: unknown; features?: { geometry: unknown }[]; geometry?: unknown };
    if (json.crs !== undefined) return null;
    const geometries = (json.features ?? [json]).map((each) => ('geometry' in each ? each.geometry : each) as { type?: string; coordinates?: unknown } | null);
    const areas = geometries.flatMap((geometry) => (geometry?.type === 'Polygon' ? [geometry.coordinates] : geometry?.type === 'MultiPolygon' ? (geometry.coordinates as unknown[]) : [null]));
    return areas.length > 0 && areas.every(isArea) ? (areas as PolygonLonLat[]) : null;
  } catch {
    return null;
  }
}

/** Rings of positions in degrees; an outline that is wrong in any other way is for the reader to explain. */
function isArea(area: unknown): boolean {
  const isPosition = (position: unknown) => Array.isArray(position) && Math.abs(position[0] as number) <= 180 && Math.abs(position[1] as number) <= 90;
  return Array.isArray(area) && area.length > 0 && area.every((ring) => Array.isArray(ring) && ring.length >= 4 && ring.every(isPosition));
}

async function areasByReader(path: string): Promise<PolygonLonLat[]> {
  const { readVectors } = await import('../importers/vector/readVectors.ts');
  const options = readOptionsFor(path, {}, null);
  const { layers, questions, repairs } = await readVectors(path, options);
  requireAnswered(options.fileName, questions);
  const [repair] = repairs;
  if (repair !== undefined) throw new BadInput(`${options.fileName}: its outline ${repair.problem} near ${repair.placeLonLat[1].toFixed(5)}, ${repair.placeLonLat[0].toFixed(5)} (latitude, longitude); correct it there.`);
  const areas = layers.flatMap((layer) => layer.featuresLonLat.features).flatMap(({ geometry }): PolygonLonLat[] => {
    if (geometry?.type === 'Polygon') return [geometry.coordinates as unknown as PolygonLonLat];
    return geometry?.type === 'MultiPolygon' ? (geometry.coordinates as unknown as PolygonLonLat[]) : [];
  });
  if (areas.length === 0) throw new BadInput(`${options.fileName}: it holds no area; draw the block as a polygon.`);
  return areas;
}
