import { withSource, type ByteSource } from './byteSource.ts';
import { ImportProblem, naming } from './importProblem.ts';
import { readPoints } from './points/readPoints.ts';
import { describeRaster, type RasterReadOptions } from './raster/describeRaster.ts';
import { inspectRaster } from './raster/inspectRaster.ts';
import { tiffNames } from './raster/withRaster.ts';
import { foreignKind } from './foreignKind.ts';
import { sniffFormat, type Sniffed, type SniffedFormat } from './sniffFormat.ts';
import type { PointsUnderstood, RasterUnderstood, VectorUnderstood } from './understood.ts';
import { layerNames, readVectors } from './vector/readVectors.ts';

export type Understood = RasterUnderstood | VectorUnderstood | PointsUnderstood;

export interface ImportFormat {
  readonly id: string;
  /** What the sniffer calls contents of this format. */
  readonly contents: readonly SniffedFormat[];
  readonly endings: readonly string[];
  readonly kind: Understood['kind'];
  readonly read: (input: string | Uint8Array, options: RasterReadOptions) => Promise<Understood>;
  /** The same without a look at the values, for a file that has been looked at before. */
  readonly readAgain?: (input: string | Uint8Array, options: RasterReadOptions) => Promise<Understood>;
}

/** Formats that are read. A new one is a reader and its row. */
const importFormats: readonly ImportFormat[] = [
  { id: 'geotiff', contents: ['geotiff'], endings: ['tif', 'tiff'], kind: 'raster', read: async (input, options) => (await inspectRaster(input, options)).understood, readAgain: describeRaster },
  { id: 'shapefile', contents: ['zip'], endings: ['zip', 'kmz'], kind: 'vector', read: readVectors },
  { id: 'geopackage', contents: ['geopackage'], endings: ['gpkg'], kind: 'vector', read: readVectors },
  { id: 'geojson', contents: ['geojson'], endings: ['geojson', 'json'], kind: 'vector', read: readVectors },
  { id: 'kml', contents: ['kml'], endings: ['kml'], kind: 'vector', read: readVectors },
  { id: 'gpx', contents: ['gpx'], endings: ['gpx'], kind: 'vector', read: readVectors },
  { id: 'table', contents: ['table'], endings: ['csv', 'tsv', 'txt'], kind: 'points', read: readPoints },
];

/** What a file holds, whatever its name says. Throws ImportProblem for anything that cannot be used. */
export async function understandFile(input: string | Uint8Array, options: RasterReadOptions): Promise<Understood> {
  return (await formatOf(input, options)).read(input, options);
}

/** The same for a file whose questions were answered: a large picture is not decoded for a look at its values once more. */
export async function understandAgain(input: string | Uint8Array, options: RasterReadOptions): Promise<Understood> {
  const format = await formatOf(input, options);
  return (format.readAgain ?? format.read)(input, options);
}

/** Files that programs lay beside a picture, and what to do about them. */
const sideFiles: readonly (readonly [RegExp, fact: string, remedy: string, why: string])[] = [
  [/\.ovr$/i, 'It is an overview beside a picture.', 'The picture alone is enough.', 'is-overview'],
  [/\.aux(\.xml)?$/i, 'It is a file of statistics beside a picture.', 'The picture alone is enough; if its place or reference system stands only here, send both together.', 'is-auxiliary'],
  [/\.(tfw|tifw|tiffw|wld|jgw|pgw)$/i, 'It is a world file, which says where a picture lies, without the picture.', 'Send both together, with the same name.', 'is-world-file'],
  [/\.prj$/i, 'It is a projection file (.prj), which names a reference system, without its layer.', 'Send it together with the shapefile or the picture of the same name.', 'is-projection'],
  [/\.msk$/i, 'It is the mask of a picture, without the picture.', 'Send both together, with the same name.', 'is-mask'],
];

async function formatOf(input: string | Uint8Array, options: RasterReadOptions): Promise<ImportFormat> {
  const beside = sideFiles.find(([name]) => name.test(options.fileName));
  if (beside !== undefined) throw new ImportProblem({ code: 'wrong-type', fact: beside[1], remedy: beside[2], params: { why: beside[3] }, file: options.fileName });
  const sniffed = await naming(options.fileName, () => withSource(input, async (source) => sniffContents(source, options.fileName)));
  const format = importFormats.find(({ contents }) => contents.includes(sniffed.format));
  if (format === undefined) throw unreadable(sniffed, options.fileName);
  return format;
}

/** An archive with a TIFF and no outlines counts as the TIFF. */
function sniffContents(source: ByteSource, fileName: string): Sniffed {
  const sniffed = sniffFormat(source.read(0, Math.min(4096, source.size)), fileName);
  return sniffed.format === 'zip' && tiffNames(source).length > 0 && layerNames(source).length === 0 ? { format: 'geotiff', foreignName: null } : sniffed;
}

function unreadable({ format, foreignName }: Sniffed, file: string): ImportProblem {
  if (format === 'empty') return new ImportProblem({ code: 'empty', fact: 'The file is empty.', remedy: 'Export or copy it again.', file });
  if (format === 'shapefile-part')
    return new ImportProblem({
      code: 'missing-part',
      fact: 'It is one part of a shapefile; a shapefile has at least .shp, .shx and .dbf.',
      remedy: 'Send all parts with the same name together, or packed into one ZIP.',
      params: { why: 'shapefile-part' },
      file,
    });
  const found = foreignName ?? 'XML of a kind that is not read';
  const remedy = 'Send a GeoTIFF, a zipped shapefile, GeoPackage, GeoJSON, KML, KMZ, GPX or CSV.';
  return new ImportProblem({ code: 'wrong-type', fact: `It is ${found}.`, remedy, params: { why: foreignKind(found), found }, file });
}
