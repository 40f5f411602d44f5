import type { Geometry } from 'geojson';
import type { Database } from 'sql.js';
import { ImportProblem } from '../importProblem.ts';
import { limits } from '../limits.ts';
import { unusableReason } from '../reference/candidates.ts';
import { referenceFromEpsg, referenceFromText } from '../reference/referenceSystem.ts';
import type { ImportQuestion, ImportWarning, QuestionReason, ReferenceSystem } from '../understood.ts';
import { openDatabaseFile, rowsOf, tableColumns } from './databaseFile.ts';
import type { RawFeature, RawLayer } from './rawLayer.ts';
import { readWellKnownBinary } from './wellKnownBinary.ts';

export interface GeoPackageReading {
  layers: RawLayer[];
  reference: ReferenceSystem | null;
  whyNoReference: QuestionReason | null;
  warnings: ImportWarning[];
  questions: ImportQuestion[];
}

/** Layers of shapes in a GeoPackage (OGC 12-128r18): one, the one that was chosen, or all with the question which. Throws ImportProblem. */
export async function readGeoPackage(bytes: Uint8Array, wanted: string | undefined): Promise<GeoPackageReading> {
  const database = await openDatabaseFile(bytes);
  try {
    const { stored: named, skipped } = featureTables(database);
    const chosen = named.find(({ name }) => name === wanted);
    const readings = (chosen === undefined ? named : [chosen]).map((table) => readTable(database, table));
    const [first] = readings;
    const questions: ImportQuestion[] = [];
    if (readings.length > 1) {
      const choices = readings.map(({ layer }) => ({ value: layer.name, label: `${layer.name} (${layer.features.length} ${layer.features.length === 1 ? 'shape' : 'shapes'})` }));
      questions.push({ code: 'layer', text: `The file holds ${readings.length} layers. Which one do you want?`, choices });
    }
    // Layers in different systems cannot share one answer: the question about the layer comes first.
    const same = readings.filter(({ reference }) => reference?.definition === first!.reference?.definition);
    return { layers: same.map(({ layer }) => layer), reference: first!.reference, whyNoReference: first!.whyNoReference, warnings: [...readings.flatMap(({ warnings }) => warnings), ...skipped.map(viewWarning)], questions };
  } finally {
    database.close();
  }
}

function viewWarning(layer: string): ImportWarning {
  const name = layer.slice(0, 60);
  return { code: 'view-layer', text: `Its layer "${name}" is a view, which is not run for safety and not offered. Save it as a layer of its own if you need it.`, params: { layer: name } };
}

interface FeatureTable {
  name: string;
  geometryColumn: string;
  systemId: number;
}

function featureTables(database: Database): { stored: FeatureTable[]; skipped: string[] } {
  const kinds = new Map(rowsOf(database, "select name, type, sql from sqlite_master where type in ('table', 'view')").map(([name, type, sql]) => [String(name), { isTable: type === 'table' && !/^\s*create\s+virtual/i.test(String(sql)) }]));
  const own = ['gpkg_contents', 'gpkg_geometry_columns', 'gpkg_spatial_ref_sys'];
  if (!own.every((name) => kinds.get(name)?.isTable))
    throw new ImportProblem({
      code: 'wrong-type',
      fact: 'It is a database, but not a GeoPackage: the tables that name its layers are missing.',
      remedy: 'Export the layer as GeoPackage, zipped shapefile or GeoJSON.',
    });
  const listed = rowsOf(database, "select c.table_name, g.column_name, g.srs_id from gpkg_contents c join gpkg_geometry_columns g on g.table_name = c.table_name where c.data_type = 'features' order by c.table_name");
  const tables = listed.map(([name, column, system]) => ({ name: String(name), geometryColumn: String(column), systemId: Number(system) }));
  if (tables.length === 0) throw new ImportProblem({ code: 'no-layer', fact: 'It holds no layer of shapes, only pictures or tables.', remedy: 'Export the layer with its shapes.' });
  // A view computes whatever its author wrote, for as long as that takes: only stored shapes are read.
  const stored = tables.filter(({ name }) => kinds.get(name)?.isTable);
  const skipped = tables.filter(({ name }) => kinds.has(name) && !kinds.get(name)!.isTable).map(({ name }) => name);
  if (stored.length === 0)
    throw new ImportProblem({
      code: 'no-layer',
      fact: `Its layer "${tables[0]!.name.slice(0, 60)}" is ${kinds.has(tables[0]!.name) ? 'a view, which is not run for safety' : 'named, but not in the file'}.`,
      remedy: 'Save the layer as one of its own and send that.',
      params: { layer: tables[0]!.name.slice(0, 60) },
    });
  return { stored, skipped };
}

interface TableReading {
  layer: RawLayer;
  reference: ReferenceSystem | null;
  whyNoReference: QuestionReason | null;
  warnings: ImportWarning[];
}

function readTable(database: Database, { name, geometryColumn, systemId }: FeatureTable): TableReading {
  const columns = tableColumns(database, name);
  const at = columns.findIndex((column) => column.toLowerCase() === geometryColumn.toLowerCase());
  if (at < 0) throw new ImportProblem({ code: 'damaged', fact: `Its layer "${name.slice(0, 60)}" has no column "${geometryColumn.slice(0, 60)}", which should hold the shapes.`, remedy: 'Export the layer again.' });
  const quoted = (word: string) => `"${word.replaceAll('"', '""')}"`;
  const rows = rowsOf(database, `select ${columns.map(quoted).join(', ')} from ${quoted(name)} limit ${limits.features + 1}`);
  const lost = { curved: 0, damaged: 0 };
  const features = rows.flatMap((row): RawFeature[] => {
    const properties = Object.fromEntries(columns.flatMap((column, index) => (index === at || row[index] instanceof Uint8Array ? [] : [[column, row[index]]])));
    return flat(row[at] instanceof Uint8Array ? shapeOf(row[at], lost) : null).map((geometry) => ({ geometry, properties }));
  });
  if (rows.length > 0 && lost.curved === rows.length)
    throw new ImportProblem({
      code: 'bad-geometry',
      fact: `All shapes of its layer "${name.slice(0, 60)}" have curved sides, which are not read.`,
      remedy: 'Turn curves into straight pieces (segmentize, linearize) and export the layer again.',
      params: { layer: name.slice(0, 60) },
    });
  const warnings: ImportWarning[] = [];
  if (lost.curved > 0) warnings.push({ code: 'curved-shapes', text: `In "${name}", ${lost.curved} ${lost.curved === 1 ? 'shape has' : 'shapes have'} curved sides, which are not read.`, params: { layer: name, count: lost.curved } });
  if (lost.damaged > 0) warnings.push({ code: 'damaged-shapes', text: `In "${name}", ${lost.damaged} of ${rows.length} shapes are damaged and left out.`, params: { layer: name, count: lost.damaged } });
  return { layer: { name, features }, warnings, ...systemOf(database, systemId) };
}

/** Members of a collection one by one. */
function flat(geometry: Geometry | null): (Geometry | null)[] {
  return geometry?.type === 'GeometryCollection' ? geometry.geometries.flatMap(flat) : [geometry];
}

const envelopeBytes = [0, 32, 48, 48, 64];

/** A shape after its header: letters GP, version, flags, system, and a box of 0 to 8 numbers. */
function shapeOf(blob: Uint8Array, lost: { curved: number; damaged: number }): Geometry | null {
  const flags = blob[3] ?? 0;
  const envelope = envelopeBytes[(flags >> 1) & 7];
  const isEmpty = (flags & 0x10) !== 0;
  try {
    if (blob[0] !== 0x47 || blob[1] !== 0x50 || envelope === undefined) throw new RangeError('no header');
    const geometry = isEmpty ? null : readWellKnownBinary(blob.subarray(8 + envelope));
    if (geometry === null && !isEmpty) lost.curved += 1;
    return geometry;
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    lost.damaged += 1;
    return null;
  }
}

function systemOf(database: Database, systemId: number): { reference: ReferenceSystem | null; whyNoReference: QuestionReason | null } {
  const row = rowsOf(database, `select srs_name, organization, organization_coordsys_id, definition from gpkg_spatial_ref_sys where srs_id = ${Number.isInteger(systemId) ? systemId : 'null'}`)[0];
  if (row === undefined || systemId === 0 || systemId === -1) return { reference: null, whyNoReference: { code: 'not-named', text: 'The file does not say which reference system its layer has.' } };
  const [name, organization, code, definition] = row;
  const shipped = String(organization).toUpperCase() === 'EPSG' ? referenceFromEpsg(Number(code), 'file') : null;
  const reading = shipped ?? referenceFromText(String(definition), 'file');
  return 'reason' in reading ? { reference: null, whyNoReference: unusableReason('The file', { name: String(name).slice(0, 80), reason: reading.reason }) } : { reference: reading, whyNoReference: null };
}
