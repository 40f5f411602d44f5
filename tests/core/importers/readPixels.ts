import { withSource } from '../../../server/importers/byteSource.ts';
import { openRaster } from '../../../server/importers/raster/openRaster.ts';
import { openPicture } from '../../../server/importers/raster/pictureBlocks.ts';

/** Every pixel of some bands, row by row; NaN where the file leaves a block out or masks it. */
export function readPixels(input: string | Uint8Array, bands: readonly number[], alphaBand: number | null = null): Promise<Float64Array[]> {
  return withSource(input, async (source) => {
    const raster = await openRaster(source);
    const { layout } = raster;
    const picture = await openPicture(raster, { bands, alphaBand, dropHuge: false, dropDark: false });
    const out = bands.map(() => new Float64Array(layout.width * layout.height).fill(NaN));
    for (let blockRow = 0; blockRow < layout.blocksDown; blockRow++) {
      for (let blockCol = 0; blockCol < layout.blocksAcross; blockCol++) {
        const block = picture.read(blockCol, blockRow);
        block?.bands.forEach(({ values, offset, stride }, band) => {
          for (let row = 0; row < block.rows; row++) {
            for (let col = 0; col < block.cols; col++) out[band]![(block.firstRow + row) * layout.width + block.firstCol + col] = values[(row * block.storedCols + col) * stride + offset]!;
          }
        });
      }
    }
    return out;
  });
}
