import { openZip, type ZipArchive } from '../archive/zipArchive.ts';
import { isPackerRubbish } from '../archive/zipDirectory.ts';
import { withSource, type ByteSource } from '../byteSource.ts';
import { ImportProblem, naming } from '../importProblem.ts';
import { referenceFromEpsg } from '../reference/referenceSystem.ts';
import { sniffFormat } from '../sniffFormat.ts';
import { decodeText } from '../textEncoding.ts';
import type { ImportQuestion, ImportWarning, ReadOptions, ReferenceSystem, VectorUnderstood } from '../understood.ts';
import { assembleVectors } from './assembleVectors.ts';
import type { RawLayer } from './rawLayer.ts';
import { readGeoJson } from './readGeoJson.ts';
import { readGeoPackage } from './readGeoPackage.ts';
import { readGpx } from './readGpx.ts';
import { readKml } from './readKml.ts';
import { readShapefile, shapefileNames } from './readShapefile.ts';

/**
 * Outlines, soil maps, rows and tracks: zipped shapefile, GeoPackage, GeoJSON, KML, KMZ, GPX, told apart by content. Shapes come out
 * in degrees; until an open question about the reference system is answered they stay out. Throws ImportProblem.
 */
export function readVectors(input: string | Uint8Array, options: ReadOptions): Promise<VectorUnderstood> {
  return naming(options.fileName, () => withSource(input, async (source) => assembleVectors({ ...(await readLayers(source, options)), options })));
}

/** The shapefiles and other outline files a ZIP holds. */
export function layerNames(source: ByteSource): string[] {
  const { entries } = openZip(source);
  return [...shapefileNames(entries), ...entries.filter(({ name }) => isOtherLayer(name)).map(({ name }) => name)];
}

function isOtherLayer(name: string): boolean {
  return /\.(kml|geojson|json|gpx|gpkg)$/i.test(name) && !isPackerRubbish(name);
}

interface LayersRead {
  layers: readonly RawLayer[];
  reference: ReferenceSystem | null;
  whyNoReference: string;
  warnings: ImportWarning[];
  questions?: ImportQuestion[];
}

async function readLayers(source: ByteSource, options: ReadOptions): Promise<LayersRead> {
  const sniffed = sniffFormat(source.read(0, Math.min(4096, source.size)), options.fileName);
  if (sniffed.format === 'zip') return readArchive(openZip(source), options);
  if (sniffed.format === 'geopackage') return readGeoPackage(source.read(0, source.size), options.answers?.layer);
  const text = (): string => decodeText(source.read(0, source.size)).text;
  return readText(sniffed.format, text, { layerName: baseName(options.fileName), foreignName: sniffed.foreignName });
}

interface TextContext {
  layerName: string;
  foreignName: string | null;
}

function readText(format: string, text: () => string, { layerName, foreignName }: TextContext): LayersRead {
  if (format === 'geojson') return readGeoJson(text(), layerName);
  const wgs84 = { reference: referenceFromEpsg(4326, 'format'), whyNoReference: '' };
  if (format === 'kml') return { ...readKml(text(), layerName), ...wgs84 };
  if (format === 'gpx') return { ...readGpx(text(), layerName), ...wgs84 };
  if (format === 'shapefile-part') throw new ImportProblem({ code: 'missing-part', fact: 'It is one part of a shapefile; a shapefile has at least .shp, .shx and .dbf.', remedy: 'Pack all parts with the same name into one ZIP and send that.' });
  if (format === 'empty') throw new ImportProblem({ code: 'empty', fact: 'The file is empty.', remedy: 'Export or copy it again.' });
  const found = foreignName ?? (format === 'geotiff' ? 'a raster picture (TIFF)' : format === 'table' ? 'a table of points' : 'XML of another kind');
  throw new ImportProblem({ code: 'wrong-type', fact: `It is ${found}, not a file of outlines.`, remedy: 'Send a zipped shapefile, GeoPackage, GeoJSON, KML, KMZ or GPX.', params: { found } });
}

/** The layers in an archive: shapefiles first; else the one GeoPackage, KML or GeoJSON inside. */
async function readArchive(archive: ZipArchive, options: ReadOptions): Promise<LayersRead> {
  const names = shapefileNames(archive.entries);
  if (names.length > 0) return readShapefiles(archive, names, options);
  const inner = archive.entries.filter(({ name }) => !isPackerRubbish(name));
  const main = inner.find(({ name }) => /(^|\/)doc\.kml$/i.test(name)) ?? inner.find(({ name }) => isOtherLayer(name));
  if (main !== undefined) {
    const bytes = archive.read(main);
    const { format } = sniffFormat(bytes.subarray(0, 4096), main.name);
    if (format === 'geopackage') return readGeoPackage(bytes, options.answers?.layer);
    return readText(format, () => decodeText(bytes).text, { layerName: baseName(main.name), foreignName: null });
  }
  const parts = inner.find(({ name }) => /\.(shx|dbf|prj)$/i.test(name));
  if (parts !== undefined) throw new ImportProblem({ code: 'missing-part', fact: `The archive holds "${parts.name.slice(0, 80)}" but no .shp file, which has the shapes.`, remedy: 'Pack .shp, .shx, .dbf and .prj of the layer into one ZIP.', params: { part: parts.name.slice(0, 80) } });
  if (inner.some(({ name }) => /\.(zip|kmz)$/i.test(name))) throw new ImportProblem({ code: 'unsafe-archive', fact: 'It holds another archive, which is not opened for safety.', remedy: 'Unpack it once and send the inner archive.' });
  if (inner.some(({ name }) => /^(xl|word|ppt)\/|^\[Content_Types\]\.xml$|^content\.xml$|^mimetype$/.test(name))) throw new ImportProblem({ code: 'wrong-type', fact: 'It is an office document, not an archive of map files.', remedy: 'Save a table as CSV, or send a zipped shapefile.' });
  const listed = inner.slice(0, 4).map(({ name }) => name.split('/').pop()!.slice(0, 40)).join(', ');
  throw new ImportProblem({ code: 'missing-part', fact: `The archive holds no .shp, .gpkg, .kml or .geojson file (it has ${listed}).`, remedy: 'Pack all parts of the shapefile (.shp, .shx, .dbf, .prj) into one ZIP.', params: { listed } });
}

function readShapefiles(archive: ZipArchive, names: readonly string[], { answers }: ReadOptions): LayersRead {
  const wanted = answers?.layer;
  const chosen = names.find((name) => baseName(name) === wanted);
  const readings = (chosen === undefined ? names : [chosen]).map((name) => readShapefile(archive, name));
  const first = readings[0]!;
  const questions: ImportQuestion[] = [];
  if (readings.length > 1) {
    const choices = readings.map(({ layer }) => ({ value: layer.name, label: `${layer.name} (${layer.features.length} ${layer.features.length === 1 ? 'shape' : 'shapes'})` }));
    questions.push({ code: 'layer', text: `The archive holds ${readings.length} layers. Which one do you want?`, choices });
  }
  // Layers in different systems cannot share one answer: the question about the layer comes first.
  const same = readings.filter(({ reference }) => reference?.definition === first.reference?.definition);
  return { layers: same.map(({ layer }) => layer), reference: first.reference, whyNoReference: first.whyNoReference, warnings: readings.flatMap(({ warnings }) => warnings), questions };
}

function baseName(path: string): string {
  return path.split(/[\\/]/).pop()!.replace(/\.[^.]*$/, '').slice(0, 80) || 'layer';
}
