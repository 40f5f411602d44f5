import type { Geometry } from 'geojson';
import { ImportProblem } from '../importProblem.ts';
import { limits } from '../limits.ts';
import { unusableReason } from '../reference/candidates.ts';
import { referenceFromEpsg, referenceFromText } from '../reference/referenceSystem.ts';
import type { ImportWarning, QuestionReason, ReferenceSystem } from '../understood.ts';
import type { RawFeature, RawLayer } from './rawLayer.ts';

export interface GeoJsonReading {
  layers: RawLayer[];
  reference: ReferenceSystem | null;
  whyNoReference: QuestionReason | null;
  warnings: ImportWarning[];
}

const geometryTypes = new Set(['Point', 'MultiPoint', 'LineString', 'MultiLineString', 'Polygon', 'MultiPolygon', 'GeometryCollection']);

/** GeoJSON of RFC 7946, and of 2008 with its `crs` member. Throws ImportProblem. */
export function readGeoJson(text: string, layerName: string): GeoJsonReading {
  checkDepth(text);
  const root = parse(text);
  const features = featuresOf(root);
  if (features === null) throw new ImportProblem({ code: 'wrong-type', fact: `It is ${kindOf(root)}, not GeoJSON.`, remedy: 'Export the outlines as GeoJSON (a FeatureCollection).' });
  const warnings: ImportWarning[] = [];
  const { reference, why } = referenceOf(root as Record<string, unknown>, features, warnings);
  return { layers: [{ name: layerName, features }], reference, whyNoReference: why, warnings };
}

/** Families of JSON that people take for GeoJSON. */
function kindOf(root: unknown): string {
  if (!isObject(root)) return 'JSON';
  if (root['type'] === 'Topology') return 'TopoJSON';
  return 'geometryType' in root || 'spatialReference' in root ? 'EsriJSON' : 'JSON';
}

function parse(text: string): unknown {
  try {
    return JSON.parse(text.replace(/^\uFEFF/, ''));
  } catch (error) {
    const sequence = featureSequence(text);
    if (sequence !== null) return sequence;
    const detail = error instanceof Error ? error.message.slice(0, 120) : '';
    throw new ImportProblem({ code: 'damaged', fact: `It is not valid JSON (${detail}).`, remedy: 'Export the file again; it was probably cut off or edited by hand.', params: { why: 'not-whole-text', detail }, cause: error });
  }
}

/** A feature a line, with or without record separators (GeoJSON text sequences, RFC 8142); null for anything else. */
function featureSequence(text: string): unknown {
  const lines = text.replaceAll('\u001e', '').split(/\r\n|\n|\r/).filter((line) => line.trim() !== '');
  if (lines.length < (text.includes('\u001e') ? 1 : 2)) return null;
  try {
    const features = lines.map((line): unknown => JSON.parse(line));
    return features.every((feature) => isObject(feature) && feature['type'] === 'Feature') ? { type: 'FeatureCollection', features } : null;
  } catch {
    return null;
  }
}

/** Brackets deeper than any real file, counted before the parser builds them. */
function checkDepth(text: string): void {
  let depth = 0;
  let inText = false;
  for (let i = 0; i < text.length; i++) {
    const code = text.charCodeAt(i);
    if (inText) {
      if (code === 92) i++;
      else if (code === 34) inText = false;
    } else if (code === 34) inText = true;
    else if (code === 91 || code === 123) {
      if (++depth > limits.jsonDepth) throw new ImportProblem({ code: 'damaged', fact: `Its brackets are nested more than ${limits.jsonDepth} deep.`, remedy: 'Export the outlines again as plain GeoJSON.' });
    } else if (code === 93 || code === 125) depth--;
  }
}

function featuresOf(root: unknown): RawFeature[] | null {
  if (!isObject(root)) return null;
  if (root['type'] === 'FeatureCollection') return Array.isArray(root['features']) ? root['features'].flatMap((feature) => featureOf(feature)) : null;
  if (root['type'] === 'Feature') return featureOf(root);
  if (typeof root['type'] === 'string' && geometryTypes.has(root['type'])) return geometriesOf(root).map((geometry) => ({ geometry, properties: {} }));
  return null;
}

function featureOf(value: unknown): RawFeature[] {
  if (!isObject(value)) return [{ geometry: null, properties: {} }];
  const properties = isObject(value['properties']) ? value['properties'] : {};
  const geometries = geometriesOf(value['geometry']);
  return geometries.length === 0 ? [{ geometry: null, properties: safe(properties) }] : geometries.map((geometry) => ({ geometry, properties: safe(properties) }));
}

/** A collection becomes one shape each; anything that is not a geometry is left out. */
function geometriesOf(value: unknown): Geometry[] {
  if (!isObject(value) || typeof value['type'] !== 'string' || !geometryTypes.has(value['type'])) return [];
  if (value['type'] === 'GeometryCollection') return Array.isArray(value['geometries']) ? value['geometries'].flatMap(geometriesOf) : [];
  return Array.isArray(value['coordinates']) ? [{ type: value['type'], coordinates: value['coordinates'] } as Geometry] : [];
}

/** Attributes under names that JavaScript gives a meaning of its own get another name. */
function safe(properties: Record<string, unknown>): Record<string, unknown> {
  return Object.fromEntries(Object.entries(properties).map(([name, value]) => [['__proto__', 'constructor', 'prototype'].includes(name) ? `${name} (attribute)` : name, value]));
}

function referenceOf(root: Record<string, unknown>, features: readonly RawFeature[], warnings: ImportWarning[]): { reference: ReferenceSystem | null; why: QuestionReason | null } {
  const named = crsName(root['crs']);
  const degrees = features.every(({ geometry }) => geometry === null || firstPositions(geometry).every(([x, y]) => Math.abs(x) <= 180 && Math.abs(y) <= 180));
  if (named === null) return degrees ? { reference: referenceFromEpsg(4326, 'format'), why: null } : { reference: null, why: { code: 'not-degrees', text: 'GeoJSON has its coordinates in degrees, but those of this file are not.' } };
  if (/CRS84$|EPSG:{1,2}4326$/i.test(named)) return { reference: referenceFromEpsg(4326, 'file'), why: null };
  const reading = referenceFromText(named, 'file');
  if ('reason' in reading) return { reference: null, why: unusableReason('The file', { name: named.slice(0, 60), reason: reading.reason }) };
  warnings.push({ code: 'crs-member', text: `It names ${reading.name} in an old way that GeoJSON no longer has; its coordinates are read in that system.`, params: { name: reading.name } });
  return { reference: reading, why: null };
}

function crsName(crs: unknown): string | null {
  if (!isObject(crs) || !isObject(crs['properties'])) return null;
  const name = crs['properties']['name'] ?? crs['properties']['code'];
  if (typeof name === 'number') return `EPSG:${name}`;
  return typeof name === 'string' ? name : null;
}

/** The first position of a shape is enough to tell degrees from metres. */
function firstPositions(geometry: Geometry): [number, number][] {
  let part: unknown = geometry.type === 'GeometryCollection' ? [] : geometry.coordinates;
  while (Array.isArray(part) && Array.isArray(part[0])) part = part[0];
  return Array.isArray(part) && typeof part[0] === 'number' && typeof part[1] === 'number' ? [[part[0], part[1]]] : [];
}

function isObject(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
