/** Formats by content. The name only decides between kinds of text that look alike. */
export type SniffedFormat = 'geotiff' | 'zip' | 'geojson' | 'kml' | 'gpx' | 'xml' | 'table' | 'shapefile-part' | 'geopackage' | 'empty' | 'foreign';

export interface Sniffed {
  format: SniffedFormat;
  /** For a foreign file: what it is, with its article, for a sentence. */
  foreignName: string | null;
}

/** First bytes of files that people send by mistake. */
const foreign: readonly (readonly [bytes: readonly number[], name: string])[] = [
  [[0x89, 0x50, 0x4e, 0x47], 'a PNG picture'],
  [[0xff, 0xd8, 0xff], 'a JPEG picture'],
  [[0x47, 0x49, 0x46, 0x38], 'a GIF picture'],
  [[0x42, 0x4d], 'a BMP picture'],
  [[0x25, 0x50, 0x44, 0x46], 'a PDF document'],
  [[0xd0, 0xcf, 0x11, 0xe0], 'an old office document'],
  [[0x4d, 0x5a], 'a Windows program'],
  [[0x7f, 0x45, 0x4c, 0x46], 'a Linux program'],
  [[0x23, 0x21], 'a script'],
  [[0x1f, 0x8b], 'a gzip archive'],
  [[0x37, 0x7a, 0xbc, 0xaf], 'a 7z archive'],
  [[0x52, 0x61, 0x72, 0x21], 'a RAR archive'],
  [[0xfd, 0x37, 0x7a, 0x58], 'an xz archive'],
  [[0x42, 0x5a, 0x68], 'a bzip2 archive'],
  [[0x28, 0xb5, 0x2f, 0xfd], 'a Zstandard archive'],
  [[0x89, 0x48, 0x44, 0x46], 'an HDF5 file'],
  [[0x43, 0x44, 0x46], 'a NetCDF file'],
  [[0x00, 0x00, 0x00, 0x0c, 0x6a, 0x50], 'a JPEG 2000 picture'],
  [[0xff, 0x4f, 0xff, 0x51], 'a JPEG 2000 picture'],
  [[0x66, 0x67, 0x62, 0x03], 'a FlatGeobuf file'],
  [[0x50, 0x41, 0x52, 0x31], 'a Parquet file'],
  [[0x41, 0x52, 0x52, 0x4f, 0x57, 0x31], 'an Arrow file'],
  [[0x45, 0x48, 0x46, 0x41, 0x5f], 'an Erdas Imagine picture (.img)'],
  [[0x4c, 0x41, 0x53, 0x46], 'a point cloud (LAS or LAZ)'],
  [[0x47, 0x52, 0x49, 0x42], 'a GRIB weather file'],
  [[0x52, 0x49, 0x46, 0x46], 'a WebP picture or a sound file'],
  [[0x6d, 0x73, 0x69, 0x64], 'a MrSID picture'],
];

/** Beginnings of texts that no reader here takes. */
const foreignTexts: readonly (readonly [RegExp, string])[] = [
  [/^ncols\s+\d+\s+nrows\s+\d+/i, 'a grid in ESRI ASCII format'],
  [/^<VRTDataset/i, 'a virtual picture (VRT), which only points to other files'],
  [/^!table/i, 'a MapInfo table'],
  [/^version\s+\d+\s+charset/i, 'a MapInfo exchange file (MIF)'],
  [/^\s*0\s+SECTION/i, 'a DXF drawing'],
  [/^ENVI\s/, 'the header of an ENVI picture'],
  [/^DSAA\s/, 'a Surfer grid'],
  [/^\{\\rtf/, 'a text document (RTF)'],
];

/** XML of maps that no reader here takes. */
const foreignXml: readonly (readonly [RegExp, string])[] = [
  [/<osm[\s>]/i, 'a map of OpenStreetMap (.osm)'],
  [/<\w+:FeatureCollection[\s>]|xmlns:gml=/i, 'a GML file'],
];

const misnamed: Sniffed = { format: 'foreign', foreignName: 'a file whose beginning is damaged, or of another kind than its name says' };

/** `first` should hold the first 4096 bytes (fewer when the file is shorter). */
export function sniffFormat(first: Uint8Array, name: string): Sniffed {
  if (first.length === 0) return found('empty');
  const is = (bytes: readonly number[], at = 0): boolean => bytes.every((byte, i) => first[at + i] === byte);
  if (is([0x49, 0x49, 42, 0]) || is([0x4d, 0x4d, 0, 42]) || is([0x49, 0x49, 43, 0]) || is([0x4d, 0x4d, 0, 43])) return found('geotiff');
  if (is([0x50, 0x4b, 3, 4]) || is([0x50, 0x4b, 5, 6])) return found('zip');
  if (is(letters('SQLite format 3'))) return found('geopackage');
  if (is([0, 0, 0x27, 0x0a]) || (/\.(dbf|shx|sbn|sbx|cpg|qpj)$/i.test(name) && first[0] !== 0x50)) return found('shapefile-part');
  const other = foreign.find(([bytes]) => is(bytes));
  if (other !== undefined) return { format: 'foreign', foreignName: other[1] };
  if (is(letters('ustar'), 257)) return { format: 'foreign', foreignName: 'a tar archive' };
  if (is(letters('ftyp'), 4)) return { format: 'foreign', foreignName: 'a HEIC picture or a film' };
  return sniffText(first, name);
}

const letters = (text: string): number[] => [...text].map((letter) => letter.charCodeAt(0));

function sniffText(first: Uint8Array, name: string): Sniffed {
  if (first[0] === 0xff && first[1] === 0xfe && first[2] === 0 && first[3] === 0) return { format: 'foreign', foreignName: 'a text in UTF-32 letters; save it as UTF-8' };
  const wide = (first[0] === 0xff && first[1] === 0xfe) || (first[0] === 0xfe && first[1] === 0xff) || first.subarray(0, 200).filter((byte) => byte === 0).length > Math.min(first.length, 200) / 3;
  const text = (wide ? String.fromCharCode(...first.filter((byte) => byte !== 0 && byte < 0xfe)) : new TextDecoder().decode(first)).replace(/^\uFEFF/, '').trimStart();
  if (/\.(tiff?|zip|kmz|gpkg|shp)$/i.test(name) && hasControls(first.subarray(0, 500))) return misnamed;
  if (!wide && isBinary(first.subarray(0, 2000))) return { format: 'foreign', foreignName: 'a binary file of an unknown kind' };
  const other = foreignTexts.find(([beginning]) => beginning.test(text));
  if (other !== undefined) return { format: 'foreign', foreignName: other[1] };
  if (/^<\?xml|^<kml|^<gpx|^<osm|^<!--/i.test(text)) {
    const map = foreignXml.find(([root]) => root.test(text));
    return map === undefined ? found(/<kml[\s>]/i.test(text) ? 'kml' : /<gpx[\s>]/i.test(text) ? 'gpx' : 'xml') : { format: 'foreign', foreignName: map[1] };
  }
  if (/^<!doctype html|^<html|^<head/i.test(text)) return { format: 'foreign', foreignName: 'a web page' };
  // A record separator opens each line of a GeoJSON text sequence (RFC 8142).
  if (/^[{[]/.test(text.startsWith('\u001e') ? text.slice(1).trimStart() : text)) return found('geojson');
  if (/^(PROJCS|GEOGCS|PROJCRS)\[/.test(text)) return { format: 'foreign', foreignName: 'a projection file (.prj) without its layer' };
  if (/\.(geojsonl?|json|kml|gpx)$/i.test(name)) return misnamed;
  return /\.(csv|tsv|txt|tab|asc|xyz)$/i.test(name) || /[,;\t|]/.test(text.split(/\r?\n/)[0] ?? '') ? found('table') : { format: 'foreign', foreignName: 'a text of an unknown kind' };
}

/** Control characters that are no white space, of which no text has any. */
function hasControls(bytes: Uint8Array): boolean {
  return bytes.some((byte) => byte < 9 || (byte > 13 && byte < 32));
}

/** A zero, or more control characters than any text has. */
function isBinary(bytes: Uint8Array): boolean {
  const controls = bytes.filter((byte) => byte < 9 || (byte > 13 && byte < 27) || (byte > 27 && byte < 30) || byte === 31 || byte === 127).length;
  return bytes.includes(0) || controls > 0.02 * bytes.length;
}

function found(format: SniffedFormat): Sniffed {
  return { format, foreignName: null };
}
