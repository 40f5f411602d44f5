import { describe, expect, it } from 'vitest';
import { gridOfOutline, type Grid } from '../../shared/analysis/grid.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { makeZoning } from '../../shared/analysis/zoning.ts';
import type { BlockInput } from '../../shared/analysis/zoningTypes.ts';
import { polygonsArea } from '../../shared/geo/rings.ts';

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

  it('are refused with a sentence when cells or layers do not match', () => {
    const coarse = gridOfOutline(other.grid.outlineXY, 32631, 5);
    expect(() => makeZoning({ ...one, together: [block(coarse, [1, 2, 3], 1)] })).toThrow(/cells of 3 m and of 5 m cannot be zoned together/);
    expect(() => makeZoning({ ...one, together: [{ ...other, layers: [{ ...other.layers[0]!, id: 'else' }] }] })).toThrow(/Layer "vigour" does not lie on all of the blocks/);
  });
});
