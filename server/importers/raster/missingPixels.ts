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
 * Returns the bands untouched when no rule can apply, which is the usual and fast way.
 */
export function withMissing(block: PictureBlock, rules: MissingRules): PictureBlock['bands'] {
  const first = block.bands[0]!;
  const isFloat = !(first.values instanceof Uint16Array);
  if (rules.mask === null && block.alpha === null && !rules.dropDark && !(rules.dropHuge && isFloat)) return block.bands;
  const pixels = block.storedCols * block.rows;
  const marked = new Float64Array(pixels);
  for (let pixel = 0; pixel < pixels; pixel++) marked[pixel] = first.values[pixel * first.stride + first.offset]!;
  if (block.alpha !== null) {
    const { values, offset, stride } = block.alpha;
    for (let pixel = 0; pixel < pixels; pixel++) if (values[pixel * stride + offset] === 0) marked[pixel] = NaN;
  }
  for (const { values, offset, stride } of block.bands) {
    if (rules.dropHuge && !(values instanceof Uint16Array)) for (let pixel = 0; pixel < pixels; pixel++) if (Math.abs(values[pixel * stride + offset]!) > HUGE) marked[pixel] = NaN;
  }
  if (rules.dropDark) for (let pixel = 0; pixel < pixels; pixel++) if (block.bands.every(({ values, offset, stride }) => values[pixel * stride + offset] === 0)) marked[pixel] = NaN;
  if (rules.mask !== null) {
    const seen = rules.mask.rect(block);
    for (let row = 0; row < block.rows; row++) for (let col = 0; col < block.cols; col++) if (seen[row * block.cols + col] === 0) marked[row * block.storedCols + col] = NaN;
  }
  return [{ values: marked, offset: 0, stride: 1 }, ...block.bands.slice(1)];
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
