import { openZip } from '../archive/zipArchive.ts';
import { withSource, type ByteSource } from '../byteSource.ts';
import { naming } from '../importProblem.ts';
import { sniffFormat } from '../sniffFormat.ts';
import { decodeText } from '../textEncoding.ts';
import type { ReadOptions, VectorUnderstood } from '../understood.ts';
import { assembleVectors } from './assembleVectors.ts';
import type { LayersRead } from './rawLayer.ts';
import { isOtherLayer, readArchive, shapefileNames } from './readArchive.ts';
import { readText } from './readText.ts';

/**
 * Outlines, soil maps, rows and tracks: zipped shapefile, GeoPackage, GeoJSON, KML, KMZ, GPX, told apart by content. Shapes come out
 * in degrees; until an open question about the reference system is answered they stay out. Throws ImportProblem.
 * Readers that need a library are loaded when a file asks for them.
 */
export function readVectors(input: string | Uint8Array, options: ReadOptions): Promise<VectorUnderstood> {
  return naming(options.fileName, () => withSource(input, async (source) => assembleVectors({ ...(await readLayers(source, options)), options })));
}

/** The shapefiles and other outline files a ZIP holds. */
export function layerNames(source: ByteSource): string[] {
  const { entries } = openZip(source);
  return [...shapefileNames(entries), ...entries.filter(({ name }) => isOtherLayer(name)).map(({ name }) => name)];
}

async function readLayers(source: ByteSource, options: ReadOptions): Promise<LayersRead> {
  const sniffed = sniffFormat(source.read(0, Math.min(4096, source.size)), options.fileName);
  if (sniffed.format === 'zip') return readArchive(openZip(source), options.answers?.layer);
  if (sniffed.format === 'geopackage') return (await import('./readGeoPackage.ts')).readGeoPackage(source.read(0, source.size), options.answers?.layer);
  return readText(sniffed, () => decodeText(source.read(0, source.size)).text, baseName(options.fileName));
}

function baseName(path: string): string {
  return path.split(/[\\/]/).pop()!.replace(/\.[^.]*$/, '').slice(0, 80) || 'layer';
}
