import type { Feature, Geometry } from 'geojson';
import { withUsableNames } from '../fieldNames.ts';
import { ImportProblem } from '../importProblem.ts';
import { limits } from '../limits.ts';
import { referenceQuestion } from '../reference/candidates.ts';
import { evenly, withSample } from '../reference/ghostSample.ts';
import { checkPlacement } from '../reference/placement.ts';
import { datumWarning, referenceFromAnswer, toLonLat } from '../reference/referenceSystem.ts';
import type { GeometryRepair, ImportQuestion, ImportWarning, QuestionReason, ReadOptions, ReferenceSystem, VectorLayer, VectorUnderstood } from '../understood.ts';
import { axesQuestion } from '../reference/axesQuestion.ts';
import { cleanGeometry, noNotes } from './cleanGeometry.ts';
import { describeField } from '../describeFields.ts';
import type { RawLayer } from './rawLayer.ts';
import { overlapWarnings } from './overlaps.ts';
import { eachPosition, mapPositions } from './positions.ts';
import { checkPolygon, repairBudget, type RepairBudget } from './repairPolygon.ts';
import { layerWarnings, noteWarnings, repairWarning } from './vectorWarnings.ts';

export interface AssembleInputs {
  layers: readonly RawLayer[];
  /** The system the file names; null when it names none. */
  reference: ReferenceSystem | null;
  /** Why the system is missing, as a sentence. */
  whyNoReference: QuestionReason | null;
  options: ReadOptions;
  warnings: readonly ImportWarning[];
  questions?: readonly ImportQuestion[];
}

/** From raw layers to what was understood: cleaned, in degrees, judged, with repairs offered. Throws ImportProblem. */
export async function assembleVectors({ layers, reference: named, whyNoReference, options, ...found }: AssembleInputs): Promise<VectorUnderstood> {
  const questions: ImportQuestion[] = [...(found.questions ?? [])];
  const warnings: ImportWarning[] = [...found.warnings];
  checkSize(layers);
  const notes = noNotes();
  const cleaned = layers.map((layer) => ({ name: layer.name, features: layer.features.map((feature) => ({ properties: withUsableNames(feature.properties), geometry: feature.geometry === null ? null : cleanGeometry(feature.geometry, notes) })) }));
  const outline = boxOf(cleaned);
  if (outline === null)
    throw new ImportProblem({
      code: 'no-layer',
      fact: layers.every(({ features }) => features.length === 0) ? 'It holds no shapes.' : 'None of its shapes has usable coordinates.',
      remedy: 'Export the layer again and check that it is not empty.',
      params: { why: layers.every(({ features }) => features.length === 0) ? 'no-shapes' : 'no-usable-shapes' },
    });
  const reference = options.answers?.epsg === undefined ? named : referenceFromAnswer(options.answers.epsg);
  const swapped = reference === null ? null : axesQuestion(outline, reference, options);
  if (swapped !== null) questions.push(swapped);
  const placement = reference === null ? null : checkPlacement(swapIf(outline, options), reference, options);
  if (reference === null) questions.push(referenceQuestion(outline, options.estateLonLat ?? null, whyNoReference ?? unnamed));
  else if (swapped === null) questions.push(...(placement?.questions ?? []));
  const sample = evenly(cleaned.flatMap(({ features }) => features.flatMap(({ geometry }) => someOf(geometry))).map((position) => (swapped === null ? swapPair(position, options) : position)));
  warnings.push(...(placement?.warnings ?? []), ...noteWarnings(notes));
  const datum = reference === null ? null : datumWarning(reference);
  if (datum !== null) warnings.push(datum);
  const farthest = Math.max(...(placement?.outlineLonLat ?? []).map(([, lat]) => Math.abs(lat)));
  if (farthest > farthestLatitude)
    throw new ImportProblem({
      code: 'bad-geometry',
      fact: `Its shapes reach to latitude ${Math.round(farthest)}, beyond every map of fields.`,
      remedy: 'Send only the shapes of the estate, with longitude before latitude.',
      params: { why: 'beyond-maps', latitude: Math.round(farthest) },
    });
  const usable = placement?.outlineLonLat === null || placement === null ? null : reference;
  const repairs: GeometryRepair[] = [];
  const out: VectorLayer[] = [];
  const budget = repairBudget();
  for (const layer of cleaned) out.push(await finishLayer(layer, { reference: usable, options, warnings, repairs, budget }));
  warnings.push(...repairs.map(repairWarning));
  return { kind: 'vector', layers: out, reference: usable, epsg: usable?.epsg ?? null, repairs, questions: withSample(questions, sample, reference), warnings };
}

const unnamed: QuestionReason = { code: 'not-named', text: 'The file does not say which reference system its coordinates are in.' };

/** UTM, in which areas are measured, ends at 80 degrees south and 84 north. */
const farthestLatitude = 80;

interface CleanLayer {
  name: string;
  features: readonly { geometry: Geometry | null; properties: Readonly<Record<string, unknown>> }[];
}

function checkSize(layers: readonly RawLayer[]): void {
  const features = layers.reduce((sum, layer) => sum + layer.features.length, 0);
  if (features > limits.features) throw new ImportProblem({ code: 'too-large', fact: `It holds ${features} shapes; ${limits.features} is the most.`, remedy: 'Cut out the part around the estate and send that.', params: { features } });
}

/** The four corners of the box around all positions, or null without any. */
function boxOf(layers: readonly CleanLayer[]): [number, number][] | null {
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  let vertices = 0;
  for (const { features } of layers) {
    for (const { geometry } of features) {
      eachPosition(geometry, ([x, y]) => {
        vertices++;
        west = Math.min(west, x!);
        east = Math.max(east, x!);
        south = Math.min(south, y!);
        north = Math.max(north, y!);
      });
    }
  }
  if (vertices > limits.vertices) throw new ImportProblem({ code: 'too-large', fact: `Its shapes have ${vertices} corners; ${limits.vertices} is the most.`, remedy: 'Simplify it, or cut out the part around the estate.', params: { vertices } });
  return vertices === 0 ? null : [[west, south], [east, south], [east, north], [west, north], [west, south]];
}

/** At most a few corners of each shape. */
function someOf(geometry: Geometry | null): [number, number][] {
  const corners: [number, number][] = [];
  eachPosition(geometry, ([x, y]) => corners.push([x!, y!]));
  return evenly(corners, 60);
}

interface LayerContext {
  reference: ReferenceSystem | null;
  options: ReadOptions;
  warnings: ImportWarning[];
  repairs: GeometryRepair[];
  budget: RepairBudget;
}

async function finishLayer(layer: CleanLayer, { reference, options, warnings, repairs, budget }: LayerContext): Promise<VectorLayer> {
  const convert = reference === null ? null : toLonLat(reference);
  const features: Feature[] = [];
  for (const [index, { geometry, properties }] of layer.features.entries()) {
    const placed = geometry === null || convert === null ? null : mapPositions(geometry, (position) => convert(swapPair([position[0]!, position[1]!], options)));
    if (placed === null) continue;
    const repair = await checkPolygon(placed, { layer: layer.name, feature: index, budget });
    if (repair !== null) repairs.push(repair);
    features.push({ type: 'Feature', id: index, geometry: placed, properties: { ...properties } });
  }
  const used = convert === null ? layer.features.filter(({ geometry }) => geometry !== null) : features;
  warnings.push(...layerWarnings(layer.name, { features, read: layer.features.length, used: used.length, crossing: new Set(repairs.filter((repair) => repair.layer === layer.name).map(({ feature }) => feature)) }));
  if (!repairs.some((repair) => repair.layer === layer.name)) warnings.push(...(await overlapWarnings(layer.name, features)));
  const names = [...new Set(layer.features.flatMap(({ properties }) => Object.keys(properties)))].slice(0, limits.fields);
  return {
    name: layer.name,
    geometryKinds: [...new Set(layer.features.flatMap(({ geometry }) => (geometry === null ? [] : [geometry.type])))],
    count: used.length,
    fields: names.map((name) => describeField(name, layer.features.map(({ properties }) => properties[name]))),
    featuresLonLat: { type: 'FeatureCollection', features },
  };
}

function swapPair([x, y]: [number, number], options: ReadOptions): [number, number] {
  return options.answers?.swapAxes === true ? [y, x] : [x, y];
}

function swapIf(outline: readonly [number, number][], options: ReadOptions): [number, number][] {
  return outline.map((position) => swapPair([position[0], position[1]], options));
}
