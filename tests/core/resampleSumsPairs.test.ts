import { describe, expect, it } from 'vitest';
import { seededRandom } from '../../shared/analysis/random.ts';
import { CellSums } from '../../shared/analysis/resampleSums.ts';

const grid = { epsg: 32719, x0: 1, y0: -1, cols: 9, rows: 7, cellSizeM: 1 };
const frame = { width: 64, height: 48, transform: [0, 0.17, 0, 0, 0, -0.17] } as const;

describe('two bands of 16 bits', () => {
  it.each([
    [0, 1, 7],
    [1, 0, 7],
    [2, 0, null],
  ])('bands %i and %i add up as floats of the same numbers do (no data: %s)', (one, two, missing) => {
    const random = seededRandom(3);
    const samples = Uint16Array.from({ length: 64 * 48 * 3 }, () => (random() < 0.2 ? 7 : Math.floor(random() * 65536)));
    const sumsOf = (values: Uint16Array | Float64Array) => {
      const sums = new CellSums(grid, frame, { bands: 2, noData: [missing, missing] });
      const band = (offset: number) => ({ values, offset, stride: 3 });
      // Two tiles, of which the first has padding.
      sums.add({ firstCol: 0, firstRow: 0, cols: 64, rows: 20, storedCols: 64, bands: [band(one), band(two)] });
      sums.add({ firstCol: 0, firstRow: 20, cols: 40, rows: 28, storedCols: 64, bands: [band(one), band(two)] });
      return sums.partSums();
    };
    const whole = sumsOf(samples);
    expect(whole.some((sum) => sum > 0)).toBe(true);
    expect(whole).toEqual(sumsOf(Float64Array.from(samples)));
  });
});
