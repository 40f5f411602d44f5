import { describe, expect, it } from 'vitest';
import { withoutNarrow } from '../../shared/analysis/labelsNarrow.ts';
import { leavesZone, pairZones, vinesApart } from '../../shared/analysis/zonePairs.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import { rankStability } from '../../shared/analysis/rankStability.ts';
import { seasonAgreement } from '../../shared/analysis/seasonAgreement.ts';

const read = (rows: string) => ({ cols: rows.split(' ')[0]!.length, labels: Uint8Array.from([...rows.replaceAll(' ', '')].map(Number)) });
const picture = (labels: Uint8Array, cols: number) => Array.from({ length: labels.length / cols }, (_, row) => [...labels.slice(row * cols, (row + 1) * cols)].join('')).join(' ');
const after = (rows: string, widthM: number) => {
  const { cols, labels } = read(rows);
  return picture(withoutNarrow(labels, cols, { widthM, cellSizeM: 1 }), cols);
};

describe('parts too narrow to work', () => {
  it('join what lies beside them: a strip of one, a tongue but for its root', () => {
    expect(after('11111111 11111111 11111111 22222222 11111111 11111111 11111111', 3)).toBe('11111111 '.repeat(7).trim());
    const tongue = after('111111111111 111111111111 111111111111 222222221111 222211111111 222211111111 222211111111 222211111111', 3);
    expect(tongue.split(' ')[3]).toMatch(/^22221{8}$|^222221{7}$/);
  });

  it('stay where the zones are wide, corners included', () => {
    const square = '111112222 111112222 111112222 111112222 111112222 333332222 333332222 333332222 333332222';
    expect(after(square, 3)).toBe(square);
  });

  it('are judged by other zones, not by the edge of the block', () => {
    expect(after('0000 1111 1111 0000', 4)).toBe('0000 1111 1111 0000');
  });
});

describe('zones of two maps', () => {
  it('are paired by the vines they share, whatever their numbers', () => {
    expect(pairZones([1, 1, 1, 2, 2, 3], [2, 2, 1, 1, 1, 1])).toEqual([{ from: 1, to: 2, vines: 2 }, { from: 2, to: 1, vines: 2 }]);
    expect(vinesApart([1, 1, 2, 2], [2, 2, 1, 2])).toBe(1);
    expect(vinesApart([1, 1, 2, 2], [2, 2, 1, 1])).toBe(0);
    const leaves = leavesZone([1, 1, 2, 2, 0, 0, 1], [2, 2, 1, 2, 0, 1, 0]);
    expect([0, 1, 2, 3, 4, 5, 6].map(leaves)).toEqual([false, false, false, true, false, true, true]);
  });
});

describe('the pairing of zones', () => {
  /** Every way of giving the zones of one map different zones of the other. */
  const fewestApart = (first: readonly number[], second: readonly number[], zones: number): number => {
    const ways = (from: number, taken: readonly number[]): number => (from > zones ? 0 : Math.max(...Array.from({ length: zones }, (_, i) => i + 1).filter((to) => !taken.includes(to)).map((to) => first.filter((zone, vine) => zone === from && second[vine] === to).length + ways(from + 1, [...taken, to]))));
    return first.length - ways(1, []);
  };

  it('moves as few vines as any pairing does, also where the largest part is better left', () => {
    // 20 of zone 2 lie in 1 and 18 in 2; zone 1 lies in 1 alone.
    const first = [...Array<number>(6).fill(1), ...Array<number>(38).fill(2)];
    const second = [...Array<number>(26).fill(1), ...Array<number>(18).fill(2)];
    expect(vinesApart(first, second)).toBe(20);
    expect(pairZones(first, second)).toEqual([{ from: 2, to: 2, vines: 18 }, { from: 1, to: 1, vines: 6 }]);
    const random = seededRandom(6);
    for (let trial = 0; trial < 60; trial++) {
      const zones = 1 + Math.floor(5 * random());
      const [a, b] = [first, second].map(() => Array.from({ length: 40 }, () => 1 + Math.floor(zones * random() * random())));
      expect(vinesApart(a!, b!)).toBe(fewestApart(a!, b!, zones));
    }
  });
});

describe('a layer in two seasons', () => {
  const values = Float32Array.from({ length: 90 }, (_, cell) => (cell * 37) % 90);
  it('agrees with itself wholly, with its opposite in the middle third alone', () => {
    expect(seasonAgreement(values, values.map((value) => 2 * value + 5))).toMatchObject({ cells: 90, rankCorrelation: expect.closeTo(1, 12), sameThird: 1 });
    expect(seasonAgreement(values, values.map((value) => -value))).toMatchObject({ rankCorrelation: expect.closeTo(-1, 12), sameThird: expect.closeTo(1 / 3, 12) });
  });
  it('is not compared where hardly anything is common or a layer does not vary', () => {
    expect(seasonAgreement(values, values.map((value, cell) => (cell < 20 ? value : NaN)))).toBeNull();
    expect(seasonAgreement(values, values.map(() => 1))).toBeNull();
  });
});

describe('ground over several seasons', () => {
  const first = Float32Array.from({ length: 120 }, (_, cell) => (cell * 37) % 120);
  const shuffledBy = (step: number) => first.map((_, cell) => (cell * step) % 120);

  it('is steady everywhere when each season has the same order, whatever the level', () => {
    const found = rankStability([first, first.map((value) => 3 * value - 7), first.map((value) => value ** 3)])!;
    expect(found.shares).toEqual({ steady: 1, moving: 0, chance: 0 });
    expect(found.shift.every((shift) => shift === 0)).toBe(true);
  });

  it('differs by |2r − 1| between a season and its opposite, so a sixth of the ground is steady and two thirds are as chance', () => {
    const found = rankStability([first, first.map((value) => -value)])!;
    first.forEach((value, cell) => expect(found.shift[cell]).toBeCloseTo(Math.abs((2 * (value + 0.5)) / 120 - 1), 6));
    expect(found.shares.steady).toBeCloseTo(1 / 6, 2);
    expect(found.shares.chance).toBeCloseTo(2 / 3, 2);
  });

  it('differs by a third on average between seasons that have nothing in common', () => {
    const random = seededRandom(4);
    const season = () => Float32Array.from({ length: 4000 }, () => random());
    const { shift } = rankStability([season(), season(), season()])!;
    expect(shift.reduce((sum, value) => sum + value, 0) / shift.length).toBeCloseTo(1 / 3, 2);
  });

  it('takes the mean over all pairs of three seasons', () => {
    // Ranks of cell 0 in the three seasons: 1, 120 and 1 of 120.
    const moved = first.map((value, cell) => (cell === 0 ? 1000 : value));
    expect(rankStability([first, moved, first])!.shift[0]).toBeCloseTo(((119 / 120) * 2) / 3, 6);
  });

  it('is told only where all seasons have a value, and not from one season', () => {
    const holed = shuffledBy(41).map((value, cell) => (cell < 20 ? NaN : value));
    const found = rankStability([first, holed])!;
    expect(found.cells).toBe(100);
    expect([...found.ground.subarray(0, 20)].every((ground) => ground === 0)).toBe(true);
    expect(found.ground.subarray(20).every((ground) => ground >= 1 && ground <= 3)).toBe(true);
    expect(rankStability([first])).toBeNull();
    expect(rankStability([first, first.map((value, cell) => (cell < 100 ? NaN : value))])).toBeNull();
  });
});
