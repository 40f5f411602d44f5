import { describe, expect, it } from 'vitest';
import type { BlockRowView } from '../../shared/contracts/rows.ts';
import { stripRows, stripTargets, type Counting } from '../../src/components/sampling/stripOfPlan.ts';
import { chosenRows } from '../../src/components/zones/zoneStrip.ts';

/** Two rows that run east, 40 vines at 1 m; the second begins 5 m further east and is 35 m long. */
const metre = 1 / 111_320;
const rows = [
  { id: 'a', label: '1', vineCount: 40, vines: [{ ordinal: 3, state: 'missing', proposed: false }], pieces: [{ from: [0, 0], to: [40 * metre, 0], lengthM: 40, firstVine: 1 }] },
  { id: 'b', label: '2', vineCount: 35, vines: [], pieces: [{ from: [5 * metre, 0], to: [40 * metre, 0], lengthM: 35, firstVine: 6 }] },
] as unknown as BlockRowView[];
const runs = new Map([['a', [{ zone: 1, from: 1, to: 10 }, { zone: 2, from: 11, to: 40 }]]]) as never;
const drawn = (counting: Counting) => stripRows(rows, runs, { posts: { start: 'white', end: 'red' }, counting });
const start: Counting = { rowOneSide: 'low', vineOneEnd: 'start' };
const far: Counting = { rowOneSide: 'high', vineOneEnd: 'end' };

describe('rows of a block on the strip', () => {
  it('are counted from the end and side where people begin', () => {
    expect(drawn(start).map(({ id, startOffsetM }) => [id, Math.round(startOffsetM)])).toEqual([['a', 0], ['b', 5]]);
    expect(drawn(start)[0]).toMatchObject({ startPost: 'white', endPost: 'red', missing: [3], zoneRuns: [{ zone: 1, from: 1, to: 10 }, { zone: 2, from: 11, to: 40 }] });
    expect(drawn(far).map(({ id, startOffsetM }) => [id, Math.round(startOffsetM)])).toEqual([['b', 0], ['a', 0]]);
    expect(drawn(far)[1]).toMatchObject({ startPost: 'red', endPost: 'white', missing: [38], zoneRuns: [{ zone: 2, from: 1, to: 30 }, { zone: 1, from: 31, to: 40 }] });
    expect(stripTargets([{ rowId: 'b', ordinal: 6, walkOrder: 1 }] as never, rows, 'end')).toEqual([{ rowId: 'b', vine: 35, order: 1 }]);
  });

  it('give the vines that were pressed, whichever end they are counted from', () => {
    const give = (counting: Counting, rowId: string, fromM: number | null, toM: number | null) => chosenRows({ rowIds: [rowId], fromM, toM }, drawn(counting), { rows, vineOneEnd: counting.vineOneEnd });
    expect(give(start, 'b', 5, 15)).toEqual([{ rowId: 'b', from: 6, to: 15 }]);
    // Vines 1 to 10 as the posts count are the last ten by their permanent numbers.
    expect(give(far, 'b', 0, 10)).toEqual([{ rowId: 'b', from: 31, to: 40 }]);
    expect(give(far, 'a', 10, null)).toEqual([{ rowId: 'a', from: null, to: 30 }]);
    expect(give(far, 'a', null, null)).toEqual([{ rowId: 'a', from: null, to: null }]);
    expect(give(start, 'b', 0, 2)).toEqual([]);
  });
});
