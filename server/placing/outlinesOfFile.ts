import type { Feature, MultiPolygon, Polygon } from 'geojson';
import { AnalysisError } from '../../shared/analysis/analysisError.ts';
import type { OfferedOutline } from '../../shared/contracts/imports.ts';
import { mainDirection } from '../../shared/geo/mainDirection.ts';
import { OutlineCrosses, readOutline } from '../../shared/geo/outline.ts';
import { ImportProblem } from '../importers/importProblem.ts';
import type { GeometryRepair } from '../importers/understood.ts';
import { readVectors } from '../importers/vector/readVectors.ts';
import type { SourceFile } from './placed.ts';
import { readOptionsOf } from './sourceFile.ts';

/** More outlines than an estate has blocks: probably a map of a whole district. */
const mostOutlines = 500;

/** The outlines in a file, each judged as a block: its name, area and main direction, or why it cannot be one. */
export async function outlinesOfFile(source: SourceFile): Promise<OfferedOutline[]> {
  const understood = await readVectors(source.path, readOptionsOf(source));
  const layer = understood.layers.find((each) => each.name === source.answers.sourceLayer) ?? understood.layers[0];
  const areas = (layer?.featuresLonLat.features ?? []).flatMap((feature) => areaOf(feature) ?? []);
  if (areas.length === 0) throw new ImportProblem({ code: 'bad-geometry', fact: 'It holds no outlines, only points or open lines.', remedy: 'Send areas, or lines that end where they begin.', file: source.fileName });
  if (areas.length > mostOutlines) {
    throw new ImportProblem({
      code: 'too-large',
      fact: `It holds ${areas.length} outlines; ${mostOutlines} is the most at once.`,
      remedy: 'Send only those of the estate.',
      params: { why: 'many-outlines', outlines: areas.length, most: mostOutlines },
      file: source.fileName,
    });
  }
  return areas.map(({ geometry, properties, id }, index) => {
    const repair = understood.repairs.find((each) => each.layer === layer!.name && each.feature === id);
    return offered({ geometry, name: nameOf(properties, source.answers.nameField), index, repair });
  });
}

interface Area {
  geometry: Polygon | MultiPolygon;
  properties: Feature['properties'];
  id: Feature['id'];
}

/** An area as it is; a line of a walk round the block becomes one when it comes back near its start. */
function areaOf(feature: Feature): Area | null {
  const { geometry, properties, id } = feature;
  if (geometry.type === 'Polygon' || geometry.type === 'MultiPolygon') return { geometry, properties, id };
  if (geometry.type !== 'LineString' || geometry.coordinates.length < 4) return null;
  const [first, last] = [geometry.coordinates[0]!, geometry.coordinates.at(-1)!];
  const isClosed = first[0] === last[0] && first[1] === last[1];
  return isClosed || comesBack(geometry.coordinates) ? { geometry: { type: 'Polygon', coordinates: [isClosed ? geometry.coordinates : [...geometry.coordinates, first]] }, properties, id } : null;
}

/** The gap between end and start is at most a tenth of the line's extent. */
function comesBack(line: readonly number[][]): boolean {
  const spread = (axis: 0 | 1) => Math.max(...line.map((position) => position[axis]!)) - Math.min(...line.map((position) => position[axis]!));
  const gap = Math.hypot(line[0]![0]! - line.at(-1)![0]!, line[0]![1]! - line.at(-1)![1]!);
  return gap <= 0.1 * Math.hypot(spread(0), spread(1));
}

function offered({ geometry, name, index, repair }: { geometry: Polygon | MultiPolygon; name: string; index: number; repair: GeometryRepair | undefined }): OfferedOutline {
  const base = { index, name, boundary: geometry as OfferedOutline['boundary'] };
  const mended = repair?.repaired ? { boundary: repair.repaired as OfferedOutline['boundary'], areaBeforeHa: repair.areaBeforeHa, areaAfterHa: repair.areaAfterHa } : null;
  try {
    const outline = readOutline(geometry);
    return { ...base, areaHa: outline.areaM2 / 10_000, mainDirectionDeg: mainDirection(outline.polygons), problem: null, place: null, repair: null };
  } catch (error) {
    if (!(error instanceof AnalysisError)) throw error;
    const place = error instanceof OutlineCrosses ? ([error.place[0], error.place[1]] as [number, number]) : null;
    return { ...base, areaHa: null, mainDirectionDeg: null, problem: { code: error.code, text: error.message, params: {} }, place, repair: mended };
  }
}

function nameOf(properties: Feature['properties'], field: string | null | undefined): string {
  const value: unknown = field ? properties?.[field] : null;
  return typeof value === 'string' || typeof value === 'number' ? String(value).replace(/\s+/g, ' ').trim().slice(0, 80) : '';
}
