import type { SampleValues } from './sampleValues.ts';
import type { BlockReader } from './blockReader.ts';

/** One block of the picture as read, with where its pixels lie. */
export interface PictureBlock {
  readonly firstCol: number;
  readonly firstRow: number;
  readonly cols: number;
  readonly rows: number;
  /** Pixels of a stored row, padding included. */
  readonly storedCols: number;
  /** The bands asked for, in order; `values[pixel · stride + offset]`. */
  readonly bands: readonly { values: SampleValues; offset: number; stride: number }[];
  readonly alpha: { values: SampleValues; offset: number; stride: number } | null;
}

/** Ways besides a no-data number in which a pixel can be missing. */
export interface MissingRules {
  /** Mask picture of one bit per pixel, 0 = missing. */
  mask: MaskReader | null;
  /** Values of floats so large that nothing in a field has them: voids that nobody marked. */
  dropHuge: boolean;
  /** A pixel that is 0 in every band asked for has seen no light: unmarked voids of reflectance pictures. */
  dropDark: boolean;
}

const HUGE = 1e30;

/**
 * The block's bands with NaN in the first band wherever a rule says missing. NaN in one band drops the pixel from all.
 * The bands come back untouched, and nothing is copied, when no rule applies to any pixel, which is the usual case.
 */
export function withMissing(block: PictureBlock, rules: MissingRules): PictureBlock['bands'] {
  const tests = [hugeTest(block, rules), darkTest(block, rules), alphaTest(block), maskTest(block, rules)].filter((test) => test !== null);
  const pixels = block.storedCols * block.rows;
  let marked: Float64Array | null = null;
  for (const isMissing of tests) {
    for (let pixel = 0; pixel < pixels; pixel++) {
      if (!isMissing(pixel)) continue;
      marked ??= copyOfFirst(block, pixels);
      marked[pixel] = NaN;
    }
  }
  return marked === null ? block.bands : [{ values: marked, offset: 0, stride: 1 }, ...block.bands.slice(1)];
}

type PixelTest = (pixel: number) => boolean;

function copyOfFirst({ bands }: PictureBlock, pixels: number): Float64Array {
  const { values, offset, stride } = bands[0]!;
  const out = new Float64Array(pixels);
  for (let pixel = 0; pixel < pixels; pixel++) out[pixel] = values[pixel * stride + offset]!;
  return out;
}

function hugeTest({ bands }: PictureBlock, { dropHuge }: MissingRules): PixelTest | null {
  const floats = dropHuge ? bands.filter(({ values }) => !(values instanceof Uint16Array)) : [];
  if (floats.length === 0) return null;
  return (pixel) => {
    for (const { values, offset, stride } of floats) if (Math.abs(values[pixel * stride + offset]!) > HUGE) return true;
    return false;
  };
}

function darkTest({ bands }: PictureBlock, { dropDark }: MissingRules): PixelTest | null {
  if (!dropDark) return null;
  return (pixel) => {
    for (const { values, offset, stride } of bands) if (values[pixel * stride + offset] !== 0) return false;
    return true;
  };
}

function alphaTest({ alpha }: PictureBlock): PixelTest | null {
  return alpha === null ? null : (pixel) => alpha.values[pixel * alpha.stride + alpha.offset] === 0;
}

function maskTest(block: PictureBlock, { mask }: MissingRules): PixelTest | null {
  if (mask === null) return null;
  const seen = mask.rect(block);
  return (pixel) => {
    const col = pixel % block.storedCols;
    return col < block.cols && seen[Math.floor(pixel / block.storedCols) * block.cols + col] === 0;
  };
}

/** Cells of decoded mask blocks kept for the next tiles of the same row. */
const MASK_CACHE = 16 * 2 ** 20;

/** Reads rectangles of a mask whose tiles or strips differ from the picture's. */
export class MaskReader {
  private readonly reader: BlockReader;
  private readonly cache = new Map<number, SampleValues | null>();
  private cached = 0;

  constructor(reader: BlockReader) {
    this.reader = reader;
  }

  /** Mask values of a rectangle of pixels, row by row; 0 = missing. */
  rect({ firstCol, firstRow, cols, rows }: { firstCol: number; firstRow: number; cols: number; rows: number }): Uint8Array {
    const { blockWidth, blockHeight } = this.reader.layout;
    const out = new Uint8Array(cols * rows);
    for (let blockRow = Math.floor(firstRow / blockHeight); blockRow * blockHeight < firstRow + rows; blockRow++) {
      for (let blockCol = Math.floor(firstCol / blockWidth); blockCol * blockWidth < firstCol + cols; blockCol++) {
        const values = this.block(blockCol, blockRow);
        if (values === null) continue;
        const toRow = Math.min(firstRow + rows, (blockRow + 1) * blockHeight);
        const toCol = Math.min(firstCol + cols, (blockCol + 1) * blockWidth);
        for (let row = Math.max(firstRow, blockRow * blockHeight); row < toRow; row++) {
          for (let col = Math.max(firstCol, blockCol * blockWidth); col < toCol; col++) {
            out[(row - firstRow) * cols + col - firstCol] = values[(row - blockRow * blockHeight) * blockWidth + col - blockCol * blockWidth] === 0 ? 0 : 1;
          }
        }
      }
    }
    return out;
  }

  private block(blockCol: number, blockRow: number): SampleValues | null {
    const key = blockRow * this.reader.layout.blocksAcross + blockCol;
    const known = this.cache.get(key);
    if (known !== undefined) return known;
    const values = this.reader.read(blockCol, blockRow, 0);
    this.cache.set(key, values);
    this.cached += values?.length ?? 0;
    for (const [oldest, old] of this.cache) {
      if (this.cached <= MASK_CACHE || oldest === key) break;
      this.cache.delete(oldest);
      this.cached -= old?.length ?? 0;
    }
    return values;
  }
}
