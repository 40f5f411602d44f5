import { describe, expect, it } from 'vitest';
import { adjustedRandIndex } from '../../shared/analysis/agreement.ts';
import { onCellsOf } from '../../shared/analysis/commonCells.ts';
import { gridOfOutline, type Grid } from '../../shared/analysis/grid.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { makeZoning } from '../../shared/analysis/zoning.ts';
import type { BlockInput } from '../../shared/analysis/zoningTypes.ts';
import { polygonsArea } from '../../shared/geo/rings.ts';
import { layRows } from '../../shared/geo/rowsLayout.ts';
import { vineTable } from '../../shared/geo/vines.ts';

const rectangle = (west: number, width: number, height: number) => gridOfOutline([[[[west, 0], [west + width, 0], [west + width, height], [west, height], [west, 0]]]], 32631, 3);

/** Vigour of plateaus from west to east, each a third of the width. */
function block(grid: Grid, levels: readonly [number, number, number], seed: number): BlockInput {
  const random = seededRandom(seed);
  const cells = Float32Array.from(grid.inside, (inside, cell) => (inside === 1 ? levels[Math.min(2, Math.floor((3 * (cell % grid.cols)) / grid.cols))]! + 0.02 * randomNormal(random) : NaN));
  return { grid, layers: [{ id: 'vigour', type: 'vigour', role: 'evidence', kind: 'number', cells, weight: null }] };
}

const one = block(rectangle(0, 180, 120), [0.3, 0.5, 0.7], 1);
const other = block(rectangle(1000, 150, 150), [0.7, 0.7, 0.5], 2);
const options = { zones: 3, seed: 4, drawAll: true };
const meansOf = (result: ReturnType<typeof makeZoning>) => new Map(result.candidates[2]!.zones.map((zone) => [zone.number, zone.layers[0]!.mean!]));

/** Rows 3 m apart. A bearing of 0 runs along the borders of zones, 90 across them. */
const planted = (own: BlockInput, rowBearingDeg: number): BlockInput => {
  const rows = layRows(own.grid.outlineXY, { originXY: own.grid.outlineXY[0]![0]![0]!, gridBearingDeg: rowBearingDeg }, { rowSpacingM: 3, vineSpacingM: 1.5, headlandM: 0 });
  return { ...own, planting: { rows, vines: vineTable(rows) } };
};

describe('blocks zoned together', () => {
  const [a, b] = [makeZoning({ ...one, options, together: [other] }), makeZoning({ ...other, options, together: [one] })];

  it('have zones of the same kind under the same number, and lack those they have no ground of', () => {
    expect([...meansOf(a).keys()]).toEqual([1, 2, 3]);
    expect([...meansOf(b).keys()]).toEqual([2, 3]);
    for (const number of [2, 3]) expect(meansOf(b).get(number)).toBeCloseTo(meansOf(a).get(number)!, 1);
    // Alone, the second block would call its middle level the lowest.
    expect(meansOf(makeZoning({ ...other, options })).get(1)).toBeGreaterThan(0.4);
  });

  it('share verdict, numbers and evidence, and each fills its own outline', () => {
    expect(b.verdict).toEqual(a.verdict);
    expect(b.advisedK).toBe(a.advisedK);
    expect(b.evidence.map(({ inertia }) => inertia)).toEqual(a.evidence.map(({ inertia }) => inertia));
    for (const [result, { grid }] of [[a, one], [b, other]] as const) {
      expect(result.gridKey).toBe(grid.key);
      for (const { labels, zones } of result.candidates) {
        labels.forEach((label, cell) => expect(label > 0).toBe(grid.inside[cell] === 1));
        expect(zones.reduce((sum, zone) => sum + zone.areaM2, 0) / polygonsArea(grid.outlineXY)).toBeCloseTo(1, 6);
      }
    }
  });

  it('are refused with a sentence when a layer does not lie on all', () => {
    expect(() => makeZoning({ ...one, together: [{ ...other, layers: [{ ...other.layers[0]!, id: 'else' }] }] })).toThrow(/Layer "vigour" does not lie on all of the blocks/);
  });
});

describe('blocks zoned together with borders along the rows', () => {
  /** Sugar follows the east of the second block, at 60 places. */
  const readings = (grid: Grid) => {
    const random = seededRandom(9);
    const cells = [...grid.inside.keys()].filter((cell) => grid.inside[cell] === 1).filter((_, at) => at % 41 === 0).slice(0, 60);
    return [{ measure: 'brix', values: cells.map((cell) => ({ cell, row: null, value: ((3 * (cell % grid.cols)) / grid.cols >= 2 ? 24 : 21) + 0.3 * randomNormal(random) })) }];
  };
  const zoned = (rowBearingDeg: number, borders: 'free' | 'wholeRow') => {
    const [here, there] = [planted(one, 0), planted({ ...other, readings: readings(other.grid) }, rowBearingDeg)];
    const all = { ...options, borders };
    return [makeZoning({ ...here, options: all, together: [there] }), makeZoning({ ...there, options: all, together: [here] })] as const;
  };

  it('are tested on fruit in the zones as each block draws them, whichever asks', () => {
    for (const [bearing, borders, tested] of [[90, 'free', 60], [0, 'wholeRow', 60], [90, 'wholeRow', null]] as const) {
      const [asked, along] = zoned(bearing, borders);
      expect(asked.fruit).toEqual(along.fruit);
      expect(asked.verdict).toEqual(along.verdict);
      expect(along.candidates[2]!.zones.length).toBe(tested === null ? 1 : 2);
      // Whole rows across the border lie all in the kind of ground that most of each row has: one zone, so nothing to compare.
      if (tested === null) expect(asked.fruit).toEqual({ state: 'inOneZone', tests: [] });
      else expect(asked.fruit).toMatchObject({ state: 'agrees', tests: [{ measure: 'brix', n: tested }] });
    }
  });
});

describe('blocks of different cells', () => {
  const coarse = block(gridOfOutline(other.grid.outlineXY, 32631, 5), [0.7, 0.7, 0.5], 2);
  const [fineSide, coarseSide] = [makeZoning({ ...one, options, together: [coarse] }), makeZoning({ ...coarse, options, together: [one] })];

  it('are looked at in the coarsest, and each keeps its own', () => {
    expect([fineSide.cellSizeM, coarseSide.cellSizeM]).toEqual([5, 5]);
    expect(coarseSide.evidence.map(({ inertia }) => inertia)).toEqual(fineSide.evidence.map(({ inertia }) => inertia));
    for (const [result, { grid }] of [[fineSide, one], [coarseSide, coarse]] as const) {
      expect(result.gridKey).toBe(grid.key);
      for (const { labels, zones } of result.candidates) {
        expect(labels.length).toBe(grid.inside.length);
        labels.forEach((label, cell) => expect(label > 0).toBe(grid.inside[cell] === 1));
        expect(zones.reduce((sum, zone) => sum + zone.areaM2, 0) / polygonsArea(grid.outlineXY)).toBeCloseTo(1, 6);
      }
    }
    expect([...meansOf(coarseSide).keys()]).toEqual([2, 3]);
    for (const number of [2, 3]) expect(meansOf(coarseSide).get(number)).toBeCloseTo(meansOf(fineSide).get(number)!, 1);
  });

  it('find the zones that cells of one size find', () => {
    const same = makeZoning({ ...one, options, together: [other] });
    const inside = [...one.grid.inside.keys()].filter((cell) => one.grid.inside[cell] === 1);
    const labels = ({ candidates }: typeof same) => inside.map((cell) => candidates[2]!.labels[cell]!);
    expect(adjustedRandIndex(labels(fineSide), labels(same))).toBeGreaterThan(0.93);
  });
});

describe('coarser cells', () => {
  const square = (sideM: number, cellSizeM: number) => gridOfOutline([[[[0, 0], [sideM, 0], [sideM, sideM], [0, sideM], [0, 0]]]], 32631, cellSizeM);
  const layer = (cells: readonly number[], kind: 'number' | 'class' = 'number') => ({ id: 'a', type: 'vigour', role: 'evidence' as const, kind, cells: Float32Array.from(cells), weight: null });

  it('hold means weighted by area; by hand for 2 m in 3 m', () => {
    const fine = square(6, 2);
    const { grid, layers } = onCellsOf(3, { grid: fine, layers: [layer([1, 2, 3, 4, 5, 6, 7, 8, 9])] });
    expect([grid.cols, grid.rows]).toEqual([2, 2]);
    // North-west: 1 whole, half of 2, half of 4, a quarter of 5, over 2.25: (1 + 1 + 2 + 1.25) / 2.25.
    [5.25, 8.25, 14.25, 17.25].forEach((sum, cell) => expect(layers[0]!.cells[cell]).toBeCloseTo(sum / 2.25, 5));
  });

  it('take the class with most ground, and pass over what is missing', () => {
    const fine = square(6, 2);
    expect([...onCellsOf(3, { grid: fine, layers: [layer([1, 2, 2, 1, 2, 2, 3, 3, 3], 'class')] }).layers[0]!.cells]).toEqual([1, 2, 3, 3]);
    expect(onCellsOf(3, { grid: fine, layers: [layer([NaN, 2, 3, NaN, NaN, 6, 7, 8, 9])] }).layers[0]!.cells[0]).toBe(2);
    expect(onCellsOf(2, { grid: fine, layers: [] }).grid).toBe(fine);
  });
});

describe('a block that lacks a zone that another has', () => {
  it('is told so, and not that small patches joined their neighbours', () => {
    const [here, there] = [block(rectangle(400_000, 180, 90), [0.2, 0.2, 0.5], 1), block(rectangle(401_000, 180, 90), [0.2, 0.5, 0.8], 2)];
    const codes = (of: BlockInput, beside: BlockInput) => makeZoning({ ...of, together: [beside], options: { zones: 3 } }).warnings.map(({ code, figures }) => [code, figures.left]);
    expect(codes(here, there)).toContainEqual(['zone-elsewhere', 2]);
    expect(codes(here, there).map(([code]) => code)).not.toContain('zone-vanished');
    expect(codes(there, here).map(([code]) => code)).not.toContain('zone-elsewhere');
  });

  it('is not told so of zones that its own rows leave nothing of', () => {
    const across = planted(one, 90);
    const { warnings, candidates } = makeZoning({ ...across, options: { ...options, borders: 'wholeRow' } });
    const left = candidates[2]!.zones.length;
    expect(left).toBeLessThan(3);
    expect(warnings.map(({ code, figures }) => [code, figures.left])).toContainEqual(['rows-took-zone', left]);
    expect(warnings.map(({ code }) => code)).not.toContain('zone-elsewhere');
    expect(makeZoning({ ...planted(one, 0), options: { ...options, borders: 'wholeRow' } }).warnings).toEqual([]);
  });
});
