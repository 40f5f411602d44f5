import { describe, expect, it } from 'vitest';
import type { GridFrame } from '../../shared/analysis/grid.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import { labelVines, rowRuns, snapToRows } from '../../shared/analysis/snapToRows.ts';
import { cheapestZone, cutIntoRuns, membershipCosts, wrongVineCosts } from '../../shared/analysis/snapToRowsProgramme.ts';
import type { XY } from '../../shared/geo/coordinates.ts';
import { layRows } from '../../shared/geo/rowsLayout.ts';
import { vineTable } from '../../shared/geo/vines.ts';
import { NearestPoints } from '../../shared/geo/vinesNearest.ts';

const digits = (text: string): number[] => [...text].map((letter) => (letter === '.' ? 0 : Number(letter)));

function runsOf(labels: ArrayLike<number>): string {
  const runs: { label: number; count: number }[] = [];
  for (const label of Array.from(labels)) {
    if (runs.at(-1)?.label === label) runs.at(-1)!.count++;
    else runs.push({ label, count: 1 });
  }
  return runs.map(({ label, count }) => `${label}x${count}`).join(' ');
}

function wrongAndCuts(own: readonly number[], result: ArrayLike<number>) {
  const wrong = own.filter((label, i) => label !== 0 && label !== result[i]).length;
  const cuts = Array.from(result).filter((label, i) => i > 0 && label !== result[i - 1]).length;
  return { wrong, cuts };
}

describe('the label of a vine', () => {
  const grid: GridFrame = { x0: 0, y0: 8, cellSizeM: 2, cols: 5, rows: 4 };
  const labels = Uint8Array.from(digits('11100' + '11022' + '00022' + '33022'));

  // Source: worked by hand on the picture above.
  it.each([
    [1, 7, 1], [7, 7, 1], [5, 5, 1], [5, 3, 2], [1, 3, 1], [3, 3, 1], [4.9, 1, 3], [5.1, 1, 2], [5, 1, 3], [9.9, 7.9, 2], [14, 1, 0],
  ])('at (%d, %d) is %d', (x, y, label) => {
    const vines = { x: Float64Array.of(x), y: Float64Array.of(y) };
    expect([...labelVines(grid, labels, vines)]).toEqual([label]);
  });
});

describe('one piece of a row', () => {
  // Source: full enumeration of all labellings in Python for short pieces, a plain dynamic programme in Python for the two longest.
  it.each([
    ['111211112221222222', 2, 2, 4, '1x8 2x10', 2, 1, 2, 8],
    ['1112221111', 2, 1, 3, '1x3 2x3 1x4', 0, 2, 1, 3],
    ['1112221111', 2, 2, 3, '1x10', 3, 0, 1, 3],
    ['1112221111', 2, 1, 4, '1x10', 3, 0, 1, 3],
    ['11111333322222', 3, 2, 5, '1x9 2x5', 4, 1, 1, 9],
    ['11.1..22.2..33', 3, 1, 3, '1x6 2x5 3x3', 0, 2, 1, 5],
    ['1212121212', 2, 1, 3, '1x10', 5, 0, 1, 5],
    ['22222222211111111111122222221111111111', 2, 4, 8, '2x9 1x29', 7, 1, 1, 16],
    ['1111111111121211221222122222222222222', 2, 3, 6, '1x16 2x21', 4, 1, 2, 16],
  ])('%s with %d zones, penalty %d, shortest %d becomes %s', (text, zones, cutPenalty, shortestRun, runs, wrong, cuts, wholeRow, wholeWrong) => {
    const own = digits(text);
    const costs = wrongVineCosts(own, zones);
    const result = cutIntoRuns(costs, { cutPenalty, shortestRun });
    expect(runsOf(result)).toBe(runs);
    expect(wrongAndCuts(own, result)).toEqual({ wrong, cuts });
    expect(cheapestZone(costs)).toBe(wholeRow);
    expect(own.filter((label) => label !== 0 && label !== wholeRow)).toHaveLength(wholeWrong);
  });

  it('agrees with trying every labelling, ties included, on 400 random pieces', () => {
    const random = seededRandom(31);
    for (let round = 0; round < 400; round++) {
      const vineCount = 1 + Math.floor(random() * 8);
      const zones = 2 + Math.floor(random() * 2);
      const rule = { cutPenalty: Math.floor(random() * 4), shortestRun: 1 + Math.floor(random() * 4) };
      const own = Array.from({ length: vineCount }, () => (random() < 0.15 ? 0 : 1 + Math.floor(random() * zones)));
      expect([...cutIntoRuns(wrongVineCosts(own, zones), rule)].join('')).toBe(byEnumeration(own, zones, rule));
    }
  });

  it('with memberships a doubtful vine gives way before a sure one', () => {
    // three sure vines of zone 1, three of zone 2, between them one that is 0.45 to 0.55
    const membership = [0.9, 0.1, 0.9, 0.1, 0.9, 0.1, 0.45, 0.55, 0.1, 0.9, 0.1, 0.9, 0.1, 0.9];
    const costs = membershipCosts(membership, 2);
    expect(costs.cost[6]).toBeCloseTo(0.1, 12);
    expect(runsOf(cutIntoRuns(costs, { cutPenalty: 0.5, shortestRun: 3 }))).toBe('1x3 2x4');
    expect(runsOf(cutIntoRuns(costs, { cutPenalty: 3, shortestRun: 3 }))).toBe('2x7');
  });
});

function byEnumeration(own: readonly number[], zones: number, rule: { cutPenalty: number; shortestRun: number }): string {
  let best = { cost: Infinity, cuts: Infinity, text: '' };
  for (let code = 0; code < zones ** own.length; code++) {
    const result = own.map((_, i) => 1 + (Math.floor(code / zones ** i) % zones));
    const lengths = runsOf(result).split(' ').map((run) => Number(run.split('x')[1]));
    if (lengths.length > 1 && lengths.some((length) => length < rule.shortestRun)) continue;
    const { wrong, cuts } = wrongAndCuts(own, result);
    const found = { cost: wrong + rule.cutPenalty * cuts, cuts, text: result.join('') };
    const better = found.cost !== best.cost ? found.cost < best.cost : found.cuts !== best.cuts ? found.cuts < best.cuts : found.text < best.text;
    if (better) best = found;
  }
  return best.text;
}

describe('a whole block', () => {
  const ring: XY[] = [[0, 0], [100, 0], [100, 60], [0, 60], [0, 0]];
  const rows = layRows([[ring]], { originXY: [0, 0], gridBearingDeg: 0 }, { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM: 0 });
  const vines = vineTable(rows);
  const grid: GridFrame = { x0: 0, y0: 60, cellSizeM: 1, cols: 100, rows: 60 };
  // a slanting border: zone 1 left of a line from (35, 0) to (65, 60)
  const labels = Uint8Array.from({ length: 6000 }, (_, cell) => ((cell % 100) + 0.5 < 35 + 30 * ((59.5 - Math.floor(cell / 100)) / 60) ? 1 : 2));

  it('whole rows: every row is one run, and cells change zone half-way between two rows', () => {
    const snapped = snapToRows({ grid, labels, rows, vines }, { mode: 'wholeRow' });
    expect(snapped.runs).toHaveLength(40);
    expect(snapped.cuts).toBe(0);
    const lastOfOne = snapped.runs.filter(({ label }) => label === 1).length;
    // rows lie at 1.25 + 2.5 i; those whose middle is left of the line's middle at x = 50 belong to zone 1
    expect(lastOfOne).toBe(20);
    for (let cell = 0; cell < 6000; cell++) expect(snapped.cellLabels[cell]).toBe((cell % 100) + 0.5 < 50 ? 1 : 2);
  });

  it('part rows: runs keep their least length, follow the border, and cells agree with their vines', () => {
    const snapped = snapToRows({ grid, labels, rows, vines }, { mode: 'partRow', shortestRunM: 12, cutPenalty: 2 });
    for (const run of snapped.runs) expect(run.toOrdinal - run.fromOrdinal + 1).toBeGreaterThanOrEqual(8);
    expect(snapped.cuts).toBeGreaterThan(5);
    expect(snapped.wrongVines).toBeLessThan(snapToRows({ grid, labels, rows, vines }, { mode: 'wholeRow' }).wrongVines);
    const again = labelVines(grid, snapped.cellLabels, vines);
    const changed = again.filter((label, vine) => label !== snapped.vineLabels[vine]).length;
    expect(changed / vines.count).toBeLessThan(0.01);
  });

  it('given memberships, a row goes to the zone its vines belong to most, not to the one with most labels', () => {
    // in every row 21 vines lean to zone 1 by a hair and 19 are surely of zone 2
    const membership = Float32Array.from({ length: 2 * vines.count }, (_, at) => {
      const inOne = vines.ordinal[at >> 1]! <= 21 ? 0.51 : 0.05;
      return at % 2 === 0 ? inOne : 1 - inOne;
    });
    const leaning = Uint8Array.from({ length: 6000 }, (_, cell) => (59.5 - Math.floor(cell / 100) < 31.5 ? 1 : 2));
    expect(snapToRows({ grid, labels: leaning, rows, vines }, { mode: 'wholeRow' }).vineLabels.every((label) => label === 1)).toBe(true);
    expect(snapToRows({ grid, labels: leaning, rows, vines }, { mode: 'wholeRow', membership }).vineLabels.every((label) => label === 2)).toBe(true);
  });

  it('every cell keeps a label where it had one and none where it had none', () => {
    const holed = labels.map((label, cell) => (cell % 7 === 0 ? 0 : label));
    const snapped = snapToRows({ grid, labels: holed, rows, vines }, { mode: 'partRow' });
    expect(snapped.cellLabels.every((label, cell) => (label === 0) === (holed[cell] === 0))).toBe(true);
  });

  it('a row without any label stays without, and its neighbours are not touched', () => {
    const empty = new Uint8Array(6000);
    const snapped = snapToRows({ grid, labels: empty, rows, vines }, { mode: 'wholeRow' });
    expect(snapped.vineLabels.every((label) => label === 0)).toBe(true);
    expect(snapped.wrongVines).toBe(0);
  });

  it('runs say from which vine to which', () => {
    const oneRow = { ...vines, count: 5, row: Int32Array.of(0, 0, 0, 1, 1), ordinal: Int32Array.of(1, 2, 3, 1, 2) };
    expect(rowRuns(oneRow, [1, 1, 2, 2, 2])).toEqual([
      { rowIndex: 0, fromOrdinal: 1, toOrdinal: 2, label: 1 },
      { rowIndex: 0, fromOrdinal: 3, toOrdinal: 3, label: 2 },
      { rowIndex: 1, fromOrdinal: 1, toOrdinal: 2, label: 2 },
    ]);
  });
});

describe('nearest point search', () => {
  it('agrees with looking at every point while points are taken out, ties to the lowest index', () => {
    const random = seededRandom(5);
    for (const regular of [true, false]) {
      const count = 300;
      const x = Float64Array.from({ length: count }, (_, i) => (regular ? 2.5 * (i % 20) : 50 * random()));
      const y = Float64Array.from({ length: count }, (_, i) => (regular ? 1.5 * Math.floor(i / 20) : 30 * random()));
      const near = new NearestPoints(x, y);
      const live = new Set(Array.from({ length: count }, (_, i) => i));
      while (live.size > 0) {
        const [px, py] = random() < 0.5 ? [60 * random() - 5, 40 * random() - 5] : [2.5 * Math.floor(20 * random()), 1.5 * Math.floor(15 * random())];
        const except = [...live][0]!;
        let best = -1;
        let bestSquare = Infinity;
        for (const i of [...live].sort((a, b) => a - b)) {
          const square = (x[i]! - px!) ** 2 + (y[i]! - py!) ** 2;
          if (i !== except && square < bestSquare) [best, bestSquare] = [i, square];
        }
        expect(near.nearest(px!, py!, except)).toBe(best);
        const gone = [...live][Math.floor(random() * live.size)]!;
        near.remove(gone);
        live.delete(gone);
      }
      expect(near.nearest(0, 0)).toBe(-1);
    }
  });

  it('works for points on one line and for none', () => {
    const near = new NearestPoints([0, 1, 2, 4, 7], [0, 0, 0, 0, 0]);
    expect(near.nearest(5, 3)).toBe(3);
    expect(new NearestPoints([], []).nearest(1, 1)).toBe(-1);
  });
});
