import { type ZipArchive } from '../archive/zipArchive.ts';
import { isPackerRubbish, type ZipEntry } from '../archive/zipDirectory.ts';
import { ImportProblem } from '../importProblem.ts';
import { sniffFormat } from '../sniffFormat.ts';
import { decodeText } from '../textEncoding.ts';
import type { ImportQuestion, ImportWarning } from '../understood.ts';
import type { LayersRead } from './rawLayer.ts';
import { readText } from './readText.ts';

/** Names of the layers in an archive: paths of .shp files without their ending. */
export function shapefileNames(entries: readonly ZipEntry[]): string[] {
  return entries.filter(({ name }) => /\.shp$/i.test(name) && !isPackerRubbish(name)).map(({ name }) => name.slice(0, -4));
}

/** Layers in an archive beside shapefiles. */
export function isOtherLayer(name: string): boolean {
  return /\.(kml|geojson|geojsonl|json|gpx|gpkg)$/i.test(name) && !isPackerRubbish(name);
}

/** The layers in an archive: shapefiles first; else a GeoPackage; else KML, GeoJSON and GPX. `wanted`: the layer that was chosen. */
export async function readArchive(archive: ZipArchive, wanted: string | undefined): Promise<LayersRead> {
  const names = shapefileNames(archive.entries);
  if (names.length > 0) return readShapefiles(archive, names, wanted);
  const others = archive.entries.filter(({ name }) => isOtherLayer(name));
  const database = others.find(({ name }) => /\.gpkg$/i.test(name));
  if (database !== undefined) return readDatabase(archive, database, { wanted, isAlone: others.length === 1 });
  if (others.length > 0) return readTexts(archive, others, wanted);
  throw nothingRead(archive);
}

async function readShapefiles(archive: ZipArchive, names: readonly string[], wanted: string | undefined): Promise<LayersRead> {
  const { readShapefile } = await import('./readShapefile.ts');
  const labels = distinctLabels(names);
  const at = labels.indexOf(wanted ?? '');
  const chosen = at < 0 ? names.map((_, each) => each) : [at];
  const reading = oneOf(chosen.map((each) => {
    const { layer, ...rest } = readShapefile(archive, names[each]!);
    return { layers: [{ ...layer, name: labels[each]! }], ...rest };
  }));
  return archive.entries.some(({ name }) => isOtherLayer(name)) ? { ...reading, warnings: [...reading.warnings, onlyRead(chosen.slice(0, 3).map((each) => `${labels[each]!.slice(0, 60)}.shp`).join(', '))] } : reading;
}

async function readDatabase(archive: ZipArchive, entry: ZipEntry, { wanted, isAlone }: { wanted: string | undefined; isAlone: boolean }): Promise<LayersRead> {
  const { readGeoPackage } = await import('./readGeoPackage.ts');
  const reading = await readGeoPackage(archive.read(entry), wanted);
  const name = entry.name.split('/').pop()!.slice(0, 60);
  return isAlone ? reading : { ...reading, warnings: [...reading.warnings, onlyRead(name)] };
}

function onlyRead(name: string): ImportWarning {
  return { code: 'other-files', text: `Of the files in the archive, only "${name}" is read.`, params: { name } };
}

/** Files that hold no shapes, as the cover of a KMZ which only names its parts, do not count beside those that do. */
async function readTexts(archive: ZipArchive, entries: readonly ZipEntry[], wanted: string | undefined): Promise<LayersRead> {
  const labels = distinctLabels(entries.map(({ name }) => name.replace(/\.[^.]*$/, '')));
  const at = labels.indexOf(wanted ?? '');
  const readings: LayersRead[] = [];
  let refusal: ImportProblem | null = null;
  for (const [each, entry] of entries.entries()) {
    if (at >= 0 && each !== at) continue;
    try {
      const bytes = archive.read(entry);
      readings.push(await readText(sniffFormat(bytes.subarray(0, 4096), entry.name), () => decodeText(bytes).text, labels[each]!));
    } catch (error) {
      if (!(error instanceof ImportProblem)) throw error;
      refusal ??= error;
    }
  }
  if (readings.length === 0) throw refusal!;
  return oneOf(readings);
}

/** A question which layer is wanted, when there are several. */
function oneOf(readings: readonly LayersRead[]): LayersRead {
  const [first] = readings;
  const questions: ImportQuestion[] = [];
  if (readings.length > 1) {
    const choices = readings.map(({ layers: [layer] }) => ({ value: layer!.name, label: `${layer!.name} (${layer!.features.length} ${layer!.features.length === 1 ? 'shape' : 'shapes'})` }));
    questions.push({ code: 'layer', text: `The archive holds ${readings.length} layers. Which one do you want?`, choices });
  }
  // Layers in different systems cannot share one answer: the question about the layer comes first.
  const same = readings.filter(({ reference }) => reference?.definition === first!.reference?.definition);
  return { layers: same.flatMap(({ layers }) => layers), reference: first!.reference, whyNoReference: first!.whyNoReference, warnings: readings.flatMap(({ warnings }) => warnings), questions };
}

/** Names of files; where two folders hold the same name, the folder goes with it. */
function distinctLabels(paths: readonly string[]): string[] {
  const parts = paths.map((path) => path.split(/[\\/]/));
  const last = parts.map((each) => each.at(-1)!.slice(0, 80) || 'layer');
  return last.map((label, at) => (last.filter((other) => other === label).length === 1 ? label : parts[at]!.slice(-3).join('/').slice(-80)));
}

function nothingRead({ entries }: ZipArchive): ImportProblem {
  const inner = entries.filter(({ name }) => !isPackerRubbish(name));
  const has = (pattern: RegExp) => inner.find(({ name }) => pattern.test(name))?.name.split('/').pop()!.slice(0, 80);
  const part = has(/\.(shx|dbf|prj)$/i);
  if (part !== undefined)
    return new ImportProblem({
      code: 'missing-part',
      fact: `The archive holds "${part}" but no .shp file, which has the shapes.`,
      remedy: 'Pack .shp, .shx, .dbf and .prj of the layer into one ZIP.',
      params: { why: 'no-shp', part },
    });
  if (has(/\.(zip|kmz|rar|7z)$/i)) return new ImportProblem({ code: 'unsafe-archive', fact: 'It holds another archive, which is not opened for safety.', remedy: 'Unpack it once and send the inner archive.', params: { why: 'archive-inside' } });
  if (inner.some(({ name }) => /^(xl|word|ppt)\/|^\[Content_Types\]\.xml$|^content\.xml$|^mimetype$/.test(name)))
    return new ImportProblem({
      code: 'wrong-type',
      fact: 'It is an office document, not an archive of map files.',
      remedy: 'Save a table as CSV, or send a zipped shapefile.',
      params: { why: 'is-document' },
    });
  if (has(/\.(gdbtable|gdbtablx)$/i))
    return new ImportProblem({
      code: 'wrong-type',
      fact: 'It is a file geodatabase, which is not read.',
      remedy: 'Export the layer as GeoPackage or zipped shapefile.',
      params: { why: 'is-geodatabase', found: 'a file geodatabase' },
    });
  const listed = inner.slice(0, 4).map(({ name }) => name.split('/').pop()!.slice(0, 40)).join(', ');
  const isTable = has(/\.(csv|tsv|txt)$/i) !== undefined;
  const remedy = isTable ? 'Unpack it and send the table itself.' : 'Pack all parts of the shapefile (.shp, .shx, .dbf, .prj) into one ZIP.';
  return new ImportProblem({ code: 'missing-part', fact: `The archive holds no .shp, .gpkg, .kml, .gpx or .geojson file (it has ${listed}).`, remedy, params: { why: isTable ? 'table-in-archive' : 'nothing-of-use', listed } });
}
