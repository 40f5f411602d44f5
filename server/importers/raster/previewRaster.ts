import { naming } from '../importProblem.ts';
import type { PixelTransform, RasterUnderstood } from '../understood.ts';
import { describeOpen, type RasterReadOptions } from './describeRaster.ts';
import type { OpenRaster } from './openRaster.ts';
import { openPicture } from './pictureBlocks.ts';
import type { RasterLayout } from './rasterLayout.ts';
import { withRaster } from './withRaster.ts';

export interface PreviewRequest {
  /** Bands to read, counted from 1; all of the file's (at most 8) when left out. */
  readonly bands?: readonly number[];
  /** Longest side of the preview in pixels. */
  readonly maxSide?: number;
  /** Number that means "no data"; undefined: as the file says; null: none. */
  readonly noData?: number | null;
}

/** Every n-th pixel of the picture, in true units, NaN where missing. */
export interface RasterPreview {
  readonly width: number;
  readonly height: number;
  readonly transform: PixelTransform;
  readonly bands: readonly { readonly index: number; readonly values: Float32Array; readonly raw: Float64Array }[];
  /** Part of a huge picture without smaller copies was left out (NaN). */
  readonly isPartial: boolean;
}

/** Pixels decoded for a preview before blocks are skipped. */
const DECODED = 250e6;

/** A small picture of the file for histograms and maps. Throws ImportProblem. */
export function previewRaster(input: string | Uint8Array, options: RasterReadOptions, request: PreviewRequest = {}): Promise<RasterPreview> {
  return naming(options.fileName, () => withRaster(input, options, (raster, own) => previewOpen(raster, describeOpen(raster, own), request)));
}

export async function previewOpen(raster: OpenRaster, understood: RasterUnderstood, { bands, maxSide = 512, noData }: PreviewRequest): Promise<RasterPreview> {
  const indexes = bands ?? understood.bands.slice(0, 8).map((band) => band.index);
  const layout = smallestAbove(raster, maxSide);
  const step = Math.max(1, Math.ceil(Math.max(layout.width, layout.height) / maxSide));
  const width = Math.ceil(layout.width / step);
  const height = Math.ceil(layout.height / step);
  const picture = await openPicture(raster, { bands: indexes, alphaBand: understood.alphaBand, dropHuge: true, dropDark: false }, layout);
  const raw = indexes.map(() => new Float64Array(width * height).fill(NaN));
  const skip = Math.max(1, Math.ceil((layout.width * layout.height) / DECODED));
  for (let blockRow = 0; blockRow < layout.blocksDown; blockRow++) {
    if (!holdsStep(blockRow * layout.blockHeight, layout.blockHeight, step)) continue;
    for (let blockCol = 0; blockCol < layout.blocksAcross; blockCol++) {
      if ((blockRow + blockCol) % skip !== 0) continue;
      const block = picture.read(blockCol, blockRow);
      if (block === null) continue;
      block.bands.forEach(({ values, offset, stride }, band) => {
        for (let y = ceilTo(block.firstRow, step); y < block.firstRow + block.rows; y += step) {
          for (let x = ceilTo(block.firstCol, step); x < block.firstCol + block.cols; x += step) {
            raw[band]![(y / step) * width + x / step] = values[((y - block.firstRow) * block.storedCols + x - block.firstCol) * stride + offset]!;
          }
        }
      });
    }
  }
  // Mask and alpha mark the first band only; a pixel is missing from all bands or from none.
  for (const band of raw.slice(1)) for (let pixel = 0; pixel < band.length; pixel++) if (Number.isNaN(raw[0]![pixel]!)) band[pixel] = NaN;
  const [x, a, b, y, c, d] = understood.transform ?? [0, 1, 0, 0, 0, -1];
  const factor = (step * raster.layout.width) / layout.width;
  return {
    width,
    height,
    transform: [x, a * factor, b * factor, y, c * factor, d * factor],
    bands: indexes.map((index, i) => ({ index, raw: raw[i]!, values: trueValues(raw[i]!, understood, { index, noData }) })),
    isPartial: skip > 1,
  };
}

/** The smallest copy in the file that still has the wanted size, or the picture itself. */
function smallestAbove(raster: OpenRaster, maxSide: number): RasterLayout {
  const enough = raster.overviews.filter((overview) => Math.max(overview.width, overview.height) >= maxSide);
  return enough.reduce((best, overview) => (overview.width < best.width ? overview : best), raster.layout);
}

function holdsStep(from: number, count: number, step: number): boolean {
  return ceilTo(from, step) < from + count;
}

function ceilTo(value: number, step: number): number {
  return Math.ceil(value / step) * step;
}

function trueValues(raw: Float64Array, understood: RasterUnderstood, { index, noData }: { index: number; noData: number | null | undefined }): Float32Array {
  const band = understood.bands.find((each) => each.index === index);
  const scale = band?.scale ?? 1;
  const offset = band?.offset ?? 0;
  const declared = noData === undefined ? (band?.noData ?? null) : noData;
  const missing = declared === null ? NaN : band?.type === 'float 32-bit' ? Math.fround(declared) : declared;
  return Float32Array.from(raw, (value) => (value === missing || !Number.isFinite(value) ? NaN : value * scale + offset));
}
