import type { ByteSource } from '../byteSource.ts';
import { ImportProblem } from '../importProblem.ts';
import { readGeoTags, type GeoTags } from './geoTags.ts';
import { readLayout, type RasterLayout } from './rasterLayout.ts';
import { readTagNumbers, scanTiffStructure, type TiffDirectory, type TiffStructure } from './tiffStructure.ts';

/** A TIFF whose structure was checked: the full picture, its tags, its mask and its smaller copies. */
export interface OpenRaster {
  readonly source: ByteSource;
  readonly structure: TiffStructure;
  readonly layout: RasterLayout;
  readonly tags: GeoTags;
  /** A picture of one bit or byte per pixel: 0 = missing. It lies in the file itself or in one beside it. */
  readonly mask: { readonly source: ByteSource; readonly layout: RasterLayout } | null;
  readonly overviews: readonly RasterLayout[];
  /** Pictures that are neither mask nor smaller copy: pages of a multi-page file. */
  readonly otherPages: number;
}

/** NewSubfileType bits of TIFF 6.0: 1 = smaller copy, 4 = transparency mask. */
const REDUCED = 1;
const MASK = 4;

/** Opens a raster, with its mask from a file of its own where there is one; nothing of the picture itself is read. Throws ImportProblem. */
export async function openRaster(source: ByteSource, maskSource: ByteSource | null = null): Promise<OpenRaster> {
  const structure = scanTiffStructure(source);
  const { littleEndian } = structure;
  const layout = readLayout(source, structure.directories[0]!, littleEndian);
  const tags = await readGeoTags(source, structure);
  let mask: OpenRaster['mask'] = null;
  let otherPages = 0;
  const overviews: RasterLayout[] = [];
  for (const directory of structure.directories.slice(1)) {
    const kind = subfileType(source, directory, littleEndian);
    const other = kind === 0 ? null : tryLayout(source, directory, littleEndian);
    if (other === null) otherPages += kind === 0 ? 1 : 0;
    else if ((kind & MASK) !== 0 && other.width === layout.width && other.height === layout.height && other.samples === 1) mask ??= { source, layout: other };
    else if ((kind & MASK) === 0 && (kind & REDUCED) !== 0 && other.samples === layout.samples) overviews.push(other);
  }
  return { source, structure, layout, tags, mask: mask ?? (maskSource === null ? null : maskBeside(maskSource, layout)), overviews, otherPages };
}

/** The mask in a file of its own (.msk). One that does not fit is refused: without it, missing pixels would count as values. */
function maskBeside(source: ByteSource, { width, height }: RasterLayout): NonNullable<OpenRaster['mask']> {
  const structure = scanTiffStructure(source);
  const layout = readLayout(source, structure.directories[0]!, structure.littleEndian);
  if (layout.width === width && layout.height === height && layout.samples === 1) return { source, layout };
  const [shown, expected] = [`${layout.width} × ${layout.height}`, `${width} × ${height}`];
  throw new ImportProblem({
    code: 'mask-misfit',
    fact: `Its mask (.msk) has ${shown} pixels and the picture ${expected}.`,
    remedy: 'Send the mask that belongs to it, or the picture with its mask inside.',
    params: { mask: shown, picture: expected },
  });
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
