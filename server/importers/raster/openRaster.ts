import type { ByteSource } from '../byteSource.ts';
import { readGeoTags, type GeoTags } from './geoTags.ts';
import { readLayout, type RasterLayout } from './rasterLayout.ts';
import { readTagNumbers, scanTiffStructure, type TiffDirectory, type TiffStructure } from './tiffStructure.ts';

/** A TIFF whose structure was checked: the full picture, its tags, its mask and its smaller copies. */
export interface OpenRaster {
  readonly source: ByteSource;
  readonly structure: TiffStructure;
  readonly layout: RasterLayout;
  readonly tags: GeoTags;
  /** A picture of one bit per pixel: 0 = missing. */
  readonly mask: RasterLayout | null;
  readonly overviews: readonly RasterLayout[];
  /** Pictures that are neither mask nor smaller copy: pages of a multi-page file. */
  readonly otherPages: number;
}

/** NewSubfileType bits of TIFF 6.0: 1 = smaller copy, 4 = transparency mask. */
const REDUCED = 1;
const MASK = 4;

/** Opens a raster; nothing of the picture itself is read. Throws ImportProblem. */
export async function openRaster(source: ByteSource): Promise<OpenRaster> {
  const structure = scanTiffStructure(source);
  const { littleEndian } = structure;
  const layout = readLayout(source, structure.directories[0]!, littleEndian);
  const tags = await readGeoTags(source, structure);
  let mask: RasterLayout | null = null;
  let otherPages = 0;
  const overviews: RasterLayout[] = [];
  for (const directory of structure.directories.slice(1)) {
    const kind = subfileType(source, directory, littleEndian);
    const other = kind === 0 ? null : tryLayout(source, directory, littleEndian);
    if (other === null) otherPages += kind === 0 ? 1 : 0;
    else if ((kind & MASK) !== 0 && other.width === layout.width && other.height === layout.height && other.samples === 1) mask ??= other;
    else if ((kind & MASK) === 0 && (kind & REDUCED) !== 0 && other.samples === layout.samples) overviews.push(other);
  }
  return { source, structure, layout, tags, mask, overviews, otherPages };
}

function subfileType(source: ByteSource, directory: TiffDirectory, littleEndian: boolean): number {
  const entry = directory.tags.get(254);
  return entry === undefined ? 0 : (readTagNumbers(source, entry, littleEndian)[0] ?? 0);
}

/** A damaged or foreign smaller copy is simply not used. */
function tryLayout(source: ByteSource, directory: TiffDirectory, littleEndian: boolean): RasterLayout | null {
  try {
    return readLayout(source, directory, littleEndian);
  } catch {
    return null;
  }
}
