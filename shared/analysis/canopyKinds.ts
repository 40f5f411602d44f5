/**
 * Which index parts canopy from what grows and lies between the rows. Two kinds of pixels are parted by Otsu's threshold.
 * Where bare soil, cover crop and vines make three humps, his two thresholds part them (Otsu 1979, section on several
 * thresholds; computed as in P.-S. Liao, T.-S. Chen and P.-C. Chung, A fast algorithm for multilevel thresholding, J. Inf.
 * Sci. Eng. 17 (2001), 713–727), and canopy is the greenest kind that stands all over the block: one that is missing from
 * part of it may be strong vines beside weak ones, which must not be told apart here. In: index of each pixel with its cell.
 */
import type { Grid } from './grid.ts';
import { otsuThreshold, otsuTwoThresholds, valleyBetween } from './otsu.ts';

export interface CanopyThreshold {
  /** Index from which a pixel is canopy. */
  readonly threshold: number;
  /** Otsu's measure of two kinds, 0…1. */
  readonly separability: number;
  /** How full the valley at the threshold is, as a share of the lower hump beside it: 1 where there is one hump only. */
  readonly valley: number;
  /** two: canopy and the rest; three: the greenest of three kinds; patchy: the two greener of three, as the greenest is missing from part of the block. */
  readonly kinds: 'two' | 'three' | 'patchy';
}

const BINS = 1024;
/** Range of the index; all offered indices lie inside, ratios are folded into it. */
const LOW = -1.5;
const HIGH = 1.5;
const WINDOW_BINS = 64;
/** A third hump counts when both valleys are emptier than this share of the lower hump beside them, and it holds so many pixels (judgement). */
const CLEAR_VALLEY = 0.7;
const LEAST_KIND = 0.05;
/** A kind stands in a window with this part of its share in the block, and all over it when in so many windows (judgement). */
const STANDS = 0.25;
const ALL_OVER = 0.9;

export class CanopyKinds {
  private readonly counts = new Float64Array(BINS);
  private readonly windows: Uint32Array;
  private readonly grid: Grid;
  private readonly side: number;
  private readonly across: number;

  /** Windows as wide as two rows hold whatever stands on and between rows. */
  constructor(grid: Grid, rowSpacingM: number) {
    this.grid = grid;
    this.side = Math.max(1, Math.ceil((2 * rowSpacingM) / grid.cellSizeM));
    this.across = Math.ceil(grid.cols / this.side);
    this.windows = new Uint32Array(this.across * Math.ceil(grid.rows / this.side) * WINDOW_BINS);
  }

  add(cell: number, index: number): void {
    const bin = Math.min(BINS - 1, Math.max(0, Math.floor(((index - LOW) * BINS) / (HIGH - LOW))));
    this.counts[bin]! += 1;
    const window = Math.floor(Math.floor(cell / this.grid.cols) / this.side) * this.across + Math.floor((cell % this.grid.cols) / this.side);
    this.windows[window * WINDOW_BINS + Math.floor((bin * WINDOW_BINS) / BINS)]! += 1;
  }

  /** Null where all pixels are of one value or there are none. */
  settle(): CanopyThreshold | null {
    const two = otsuThreshold(this.counts);
    if (two === null) return null;
    const { separability } = two;
    const simple = { threshold: valueAbove(two.bin), separability, valley: valleyBetween(this.counts, [-1, two.bin, BINS - 1]), kinds: 'two' } as const;
    const three = otsuTwoThresholds(this.counts);
    if (three === null) return simple;
    const [low, high] = three;
    const [lowValley, highValley] = [valleyBetween(this.counts, [-1, low, high]), valleyBetween(this.counts, [low, high, BINS - 1])];
    const shares = [this.share(0, low + 1), this.share(low + 1, high + 1), this.share(high + 1, BINS)];
    if (Math.max(lowValley, highValley) > CLEAR_VALLEY || Math.min(...shares) < LEAST_KIND) return simple;
    const isAllOver = this.standsAllOver(high + 1, shares[2]!);
    const [bin, valley] = isAllOver ? [high, highValley] : [low, lowValley];
    // Two soils beside one canopy are parted from it by either threshold alike.
    const moved = this.share(Math.min(bin, two.bin) + 1, Math.max(bin, two.bin) + 1);
    return { threshold: valueAbove(bin), separability, valley, kinds: isAllOver ? (moved < LEAST_KIND ? 'two' : 'three') : 'patchy' };
  }

  private share(from: number, to: number): number {
    const sum = (counts: Float64Array) => counts.reduce((all, count) => all + count, 0);
    return sum(this.counts.subarray(from, to)) / sum(this.counts);
  }

  /** Whether pixels from a bin on stand in nearly every window that is well covered. */
  private standsAllOver(fromBin: number, share: number): boolean {
    const from = Math.ceil((fromBin * WINDOW_BINS) / BINS);
    const windows = Array.from({ length: this.windows.length / WINDOW_BINS }, (_, at) => this.windows.subarray(at * WINDOW_BINS, (at + 1) * WINDOW_BINS));
    const sum = (counts: Uint32Array) => counts.reduce((all, count) => all + count, 0);
    const totals = windows.map(sum);
    const most = totals.reduce((max, total) => Math.max(max, total), 0);
    const judged = windows.flatMap((counts, at) => (totals[at]! < most / 2 ? [] : [sum(counts.subarray(from)) / totals[at]!]));
    return judged.filter((part) => part >= STANDS * share).length >= ALL_OVER * judged.length;
  }
}

function valueAbove(bin: number): number {
  return LOW + ((bin + 1) * (HIGH - LOW)) / BINS;
}
