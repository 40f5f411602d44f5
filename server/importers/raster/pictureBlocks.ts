import { openBlocks, type BlockReader } from './blockReader.ts';
import { MaskReader, withMissing, type MissingRules, type PictureBlock } from './missingPixels.ts';
import type { OpenRaster } from './openRaster.ts';
import type { RasterLayout } from './rasterLayout.ts';

/** Which bands to read, counted from 1, and how pixels without a no-data number can be missing. */
export interface PictureRequest {
  readonly bands: readonly number[];
  readonly alphaBand: number | null;
  readonly dropHuge: boolean;
  readonly dropDark: boolean;
}

/** Tiles or strips of a picture with the bands asked for, missing pixels marked; null for a block the file leaves out. */
export interface PictureReader {
  readonly layout: RasterLayout;
  read(blockCol: number, blockRow: number): PictureBlock | null;
}

export async function openPicture(raster: OpenRaster, request: PictureRequest, layout: RasterLayout = raster.layout): Promise<PictureReader> {
  const blocks = await openBlocks(raster.source, layout);
  const mask = raster.mask === null || layout !== raster.layout ? null : new MaskReader(await openBlocks(raster.mask.source, raster.mask.layout));
  const rules: MissingRules = { mask, dropHuge: request.dropHuge, dropDark: request.dropDark };
  return {
    layout,
    read(blockCol, blockRow) {
      const block = readBands(blocks, request, { blockCol, blockRow });
      return block === null ? null : { ...block, bands: withMissing(block, rules) };
    },
  };
}

function readBands(blocks: BlockReader, { bands, alphaBand }: PictureRequest, { blockCol, blockRow }: { blockCol: number; blockRow: number }): PictureBlock | null {
  const { layout } = blocks;
  const firstCol = blockCol * layout.blockWidth;
  const firstRow = blockRow * layout.blockHeight;
  const place = { firstCol, firstRow, cols: Math.min(layout.blockWidth, layout.width - firstCol), rows: Math.min(layout.blockHeight, layout.height - firstRow), storedCols: layout.blockWidth };
  if (!layout.separate) {
    const values = blocks.read(blockCol, blockRow, 0);
    if (values === null) return null;
    const band = (index: number) => ({ values, offset: index - 1, stride: layout.samples });
    return { ...place, bands: bands.map(band), alpha: alphaBand === null ? null : band(alphaBand) };
  }
  const planes = new Map([...new Set([...bands, ...(alphaBand === null ? [] : [alphaBand])])].map((index) => [index, blocks.read(blockCol, blockRow, index - 1)]));
  if ([...planes.values()].some((values) => values === null)) return null;
  const plane = (index: number) => ({ values: planes.get(index)!, offset: 0, stride: 1 });
  return { ...place, bands: bands.map(plane), alpha: alphaBand === null ? null : plane(alphaBand) };
}
