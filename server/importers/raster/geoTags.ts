import { GeoTIFF } from 'geotiff';
import type { ByteSource } from '../byteSource.ts';
import { readTagNumbers, type TiffStructure } from './tiffStructure.ts';

/** Everything a GeoTIFF says about its place and its bands, unjudged. */
export interface GeoTags {
  pixelScale: readonly number[] | null;
  tiePoints: readonly number[] | null;
  transformation: readonly number[] | null;
  /** Values of the geo keys by their names in the GeoTIFF standard. */
  geoKeys: Readonly<Record<string, unknown>> | null;
  noDataText: string | null;
  /** XML of tag 42112. */
  metadataXml: string | null;
  photometric: number | null;
  extraSamples: readonly number[];
  dateTime: string | null;
}

/** Reads the tags of the first picture through the GeoTIFF library; the structure was checked before. */
export async function readGeoTags(source: ByteSource, structure: TiffStructure): Promise<GeoTags> {
  const tiff = await GeoTIFF.fromSource(librarySource(source));
  const image = await tiff.getImage(0);
  const { fileDirectory } = image;
  const list = (name: 'ModelPixelScale' | 'ModelTiepoint' | 'ModelTransformation'): number[] | null => {
    const value = fileDirectory.getValue(name);
    return value === undefined ? null : Array.from(value as ArrayLike<number>);
  };
  const text = async (name: 'GDAL_METADATA' | 'DateTime'): Promise<string | null> => {
    const value: unknown = await fileDirectory.loadValue(name);
    return typeof value === 'string' ? value.replace(/\0[\s\S]*$/, '') : null;
  };
  const extra = structure.directories[0]!.tags.get(338);
  const noData: unknown = fileDirectory.getValue('GDAL_NODATA');
  return {
    pixelScale: list('ModelPixelScale'),
    tiePoints: list('ModelTiepoint'),
    transformation: list('ModelTransformation'),
    geoKeys: geoKeysOf(() => image.getGeoKeys()),
    noDataText: typeof noData === 'string' ? noData.replace(/\0[\s\S]*$/, '').trim() : null,
    metadataXml: await text('GDAL_METADATA'),
    photometric: fileDirectory.getValue('PhotometricInterpretation') ?? null,
    extraSamples: extra === undefined ? [] : Array.from(readTagNumbers(source, extra, structure.littleEndian)),
    dateTime: await text('DateTime'),
  };
}

/** A broken key directory is the same as none: the file is asked about, not refused. */
function geoKeysOf(read: () => Record<string, unknown> | null): Record<string, unknown> | null {
  try {
    return read();
  } catch {
    return null;
  }
}

/** The library reads a little past what it needs; past the end of the file it gets zeros. */
function librarySource(source: ByteSource) {
  const slice = (offset: number, length: number): ArrayBuffer => {
    const kept = Math.max(0, Math.min(length, source.size - offset));
    if (kept === length) return source.read(offset, length).buffer;
    const padded = new Uint8Array(length);
    if (kept > 0) padded.set(source.read(offset, kept));
    return padded.buffer;
  };
  return {
    fileSize: source.size,
    fetch: async (slices: readonly { offset: number; length: number }[]) => slices.map(({ offset, length }) => slice(offset, length)),
    fetchSlice: async ({ offset, length }: { offset: number; length: number }) => ({ offset, length, data: slice(offset, length) }),
    close: async () => undefined,
  };
}
