import type { Geometry, Position } from 'geojson';
import { parseShp } from 'shpjs';
import type { ZipArchive } from '../archive/zipArchive.ts';
import { ImportProblem } from '../importProblem.ts';
import { unusableReason } from '../reference/candidates.ts';
import { referenceFromText } from '../reference/referenceSystem.ts';
import type { ImportWarning, QuestionReason, ReferenceSystem } from '../understood.ts';
import { readDbf, type DbfTable } from './dbfTable.ts';
import { placeHoles } from './placeHoles.ts';
import type { RawFeature, RawLayer } from './rawLayer.ts';
import { checkShapeRecords } from './shapeRecords.ts';

export interface ShapefileReading {
  layer: RawLayer;
  reference: ReferenceSystem | null;
  whyNoReference: QuestionReason | null;
  warnings: ImportWarning[];
}

/** One layer: shapes, attributes, reference system. Throws ImportProblem; what can be done without is a warning. */
export function readShapefile(archive: ZipArchive, path: string): ShapefileReading {
  const part = (ending: string): Uint8Array<ArrayBuffer> | null => {
    const entry = archive.entries.find(({ name }) => name.toLowerCase() === `${path}.${ending}`.toLowerCase());
    return entry === undefined ? null : archive.read(entry);
  };
  const name = path.split('/').pop()!;
  const warnings: ImportWarning[] = [];
  const records = checkShapeRecords(part('shp')!);
  if (records.isCutOff) throw new ImportProblem({ code: 'truncated', fact: `"${name}.shp" ends in the middle of its shapes, after ${records.count}.`, remedy: 'Export or copy the layer again.', params: { layer: name, count: records.count } });
  if (records.damaged > 0) warnings.push({ code: 'damaged-shapes', text: `In "${name}", ${records.damaged} of ${records.count} shapes are damaged and left out.`, params: { layer: name, count: records.damaged } });
  const shapes = parseShp(new DataView(records.bytes.buffer)) as unknown as (Geometry | null)[];
  if (part('shx') === null) warnings.push({ code: 'missing-shx', text: `"${name}.shx" is missing from the archive; the shapes are complete without it.`, params: { layer: name } });
  const table = readTable(part('dbf'), part('cpg'), { name, shapes: records.count, warnings });
  const features = shapes.map((geometry, i): RawFeature => ({ geometry: geometry === null ? null : placeHoles(withoutEmptyParts(geometry)), properties: table?.rows[i] ?? {} }));
  return { layer: { name, features }, warnings, ...readProjection(part('prj'), name) };
}

function readTable(dbf: Uint8Array | null, cpg: Uint8Array | null, { name, shapes, warnings }: { name: string; shapes: number; warnings: ImportWarning[] }): DbfTable | null {
  if (dbf === null) {
    warnings.push({ code: 'missing-dbf', text: `"${name}.dbf" is missing from the archive: the shapes have no attributes. Outlines can be used; a soil map cannot.`, params: { layer: name } });
    return null;
  }
  try {
    const table = readDbf(dbf, cpg === null ? null : new TextDecoder().decode(cpg));
    if (table.encoding === null) warnings.push({ code: 'encoding-guessed', text: `"${name}" does not say how its letters are written; they are read as Western European. Check names with accents.`, params: { layer: name } });
    if (table.rows.length !== shapes) warnings.push({ code: 'row-count', text: `"${name}" has ${shapes} shapes and ${table.rows.length} rows of attributes; they are matched in order.`, params: { layer: name, shapes, rows: table.rows.length } });
    return table;
  } catch (error) {
    warnings.push({ code: 'damaged-dbf', text: `"${name}.dbf" is damaged: the shapes have no attributes.`, params: { layer: name, detail: error instanceof Error ? error.message : '' } });
    return null;
  }
}

function readProjection(prj: Uint8Array | null, name: string): { reference: ReferenceSystem | null; whyNoReference: QuestionReason | null } {
  if (prj === null) return { reference: null, whyNoReference: { code: 'no-prj', text: `"${name}.prj", which names the reference system, is missing from the archive.`, params: { part: `${name}.prj` } } };
  const reading = referenceFromText(new TextDecoder().decode(prj.subarray(0, 20_000)), 'projection file');
  return 'reason' in reading ? { reference: null, whyNoReference: unusableReason(`"${name}.prj"`, reading) } : { reference: reading, whyNoReference: null };
}

function withoutEmptyParts(geometry: Geometry): Geometry {
  if (geometry.type === 'Polygon') return { type: 'Polygon', coordinates: geometry.coordinates.filter((ring: Position[]) => ring.length > 0) };
  return geometry;
}
