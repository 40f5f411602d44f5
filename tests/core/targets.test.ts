import { describe, expect, it } from 'vitest';
import type { GridFrame } from '../../shared/analysis/grid.ts';
import { labelVines } from '../../shared/analysis/snapToRows.ts';
import type { XY } from '../../shared/geo/coordinates.ts';
import { layRows } from '../../shared/geo/rowsLayout.ts';
import { type VineTable, vineIndex, vineTable } from '../../shared/geo/vines.ts';
import { placeCount } from '../../shared/sampling/balance.ts';
import { eligibleVines } from '../../shared/sampling/eligible.ts';
import { vinesNearBorder } from '../../shared/sampling/eligibleBorder.ts';
import { reserveVines } from '../../shared/sampling/reserve.ts';
import { serpentine, systematicPlaces, systematicStart } from '../../shared/sampling/systematic.ts';
import { drawTargets } from '../../shared/sampling/targets.ts';

/** rows × vines at 2.5 × 1.5 m. */
function regular(rows: number, vines: number): VineTable {
  const ring: XY[] = [[0, 0], [2.5 * rows, 0], [2.5 * rows, 1.5 * vines], [0, 1.5 * vines], [0, 0]];
  return vineTable(layRows([[ring]], { originXY: [0, 0], gridBearingDeg: 0 }, { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM: 0 }));
}
const all = (table: VineTable): number[] => [...table.row.keys()];
const pairsOf = (table: VineTable, vines: readonly (number | null)[]) =>
  vines.map((vine) => (vine === null ? null : [table.row[vine]! + 1, table.ordinal[vine]!]));
const indexOf = (table: VineTable, [row, vine]: readonly [number, number]): number => vineIndex(table, row - 1, vine);

describe('eligible vines', () => {
  it('6 rows of 10 vines leave 24: four rows, vines 3 to 8', () => {
    const table = regular(6, 10);
    const { vines, relaxed } = eligibleVines({ table, candidates: all(table) }, 1);
    expect(vines).toHaveLength(24);
    expect(new Set(pairsOf(table, vines).map((pair) => pair![0]))).toEqual(new Set([2, 3, 4, 5]));
    expect(new Set(pairsOf(table, vines).map((pair) => pair![1]))).toEqual(new Set([3, 4, 5, 6, 7, 8]));
    expect(relaxed).toEqual([]);
  });

  it.each([
    [8, ['endVines'], 8],
    [9, ['endVines', 'edgeRows'], 12],
    [13, ['endVines', 'edgeRows', 'allEnds'], 24],
    [30, ['endVines', 'edgeRows', 'allEnds'], 24],
  ])('6 rows of 4 vines leave none; for %d the rules %j are given up and %d are left', (needed, relaxed, left) => {
    const table = regular(6, 4);
    const found = eligibleVines({ table, candidates: all(table) }, needed);
    expect(found.relaxed).toEqual(relaxed);
    expect(found.vines).toHaveLength(left);
  });

  it('vines near a zone border are the first to be let in again, missing vines never', () => {
    const table = regular(6, 10);
    const unusable = Uint8Array.from(all(table), (vine) => (table.ordinal[vine] === 5 ? 1 : 0));
    const nearBorder = Uint8Array.from(all(table), (vine) => (table.ordinal[vine]! > 5 ? 1 : 0));
    expect(eligibleVines({ table, candidates: all(table), unusable, nearBorder }, 8)).toMatchObject({ relaxed: [] });
    const relaxed = eligibleVines({ table, candidates: all(table), unusable, nearBorder }, 20);
    expect(relaxed.relaxed).toEqual(['zoneBorder']);
    expect(relaxed.vines).toHaveLength(20);
    expect(relaxed.vines.some((vine) => table.ordinal[vine] === 5)).toBe(false);
  });

  it('each piece of an interrupted row loses its end vines', () => {
    const ring: XY[] = [[0, 0], [120, 0], [120, 80], [80, 80], [80, 30], [40, 30], [40, 80], [0, 80], [0, 0]];
    const table = vineTable(layRows([[ring]], { originXY: [0, 0], gridBearingDeg: 90 }, { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM: 3 }));
    const inRowFour = eligibleVines({ table, candidates: all(table) }, 1).vines.filter((vine) => table.row[vine] === 3).map((vine) => table.ordinal[vine]);
    expect(inRowFour).not.toContain(21);
    expect(inRowFour).not.toContain(24);
    expect(inRowFour).toContain(20);
    expect(inRowFour).toContain(25);
  });
});

describe('systematic places', () => {
  // by hand from ceil(u + jN/n)
  it.each([
    [137, 12, 5.3, [6, 17, 29, 40, 51, 63, 74, 86, 97, 109, 120, 131]],
    [100, 8, 4, [4, 17, 29, 42, 54, 67, 79, 92]],
  ])('%d vines, %d wanted, start %d', (listLength, count, start, places) => {
    expect(systematicPlaces(listLength, count, start)).toEqual(places);
  });

  it.each([
    [5, 1.7, [2, 7, 12, 17, 21], [[2, 4], [3, 8], [3, 3], [4, 7], [5, 6]]],
    [7, 0.4, [1, 4, 8, 11, 15, 18, 21], [[2, 3], [2, 6], [3, 7], [3, 4], [4, 5], [4, 8], [5, 6]]],
  ])('%d along the walk up and down the rows from %d', (count, start, places, vines) => {
    const table = regular(6, 10);
    const list = serpentine(table, eligibleVines({ table, candidates: all(table) }, 1).vines);
    expect(systematicPlaces(24, count, start)).toEqual(places);
    expect(pairsOf(table, places.map((place) => list[place - 1]!))).toEqual(vines);
  });

  it('a random start is never 0, so the first place is never before the list', () => {
    expect(systematicStart(24, 5, () => 0)).toBe(4.8);
    expect(systematicStart(24, 5, () => 1 - 2 ** -32)).toBeGreaterThan(0);
  });
});

describe('reserves', () => {
  const table = regular(6, 10);
  const eligible = eligibleVines({ table, candidates: all(table) }, 1).vines;
  const without = (...missing: [number, number][]) => {
    const gone = new Set(missing.map((pair) => indexOf(table, pair)));
    return eligible.filter((vine) => !gone.has(vine));
  };
  const inZone = (zone: 1 | 2) => eligible.filter((vine) => (table.ordinal[vine]! <= 5 ? 1 : 2) === zone);
  const reserves = (candidates: readonly number[], targets: [number, number][]) =>
    pairsOf(table, reserveVines(table, candidates, targets.map((pair) => indexOf(table, pair))));

  // worked by hand on the 6 × 10 block
  it('the next higher vine, or the next lower at the end of a row', () => {
    expect(reserves(eligible, [[2, 3], [3, 8], [4, 4]])).toEqual([[2, 4], [3, 7], [4, 5]]);
  });
  it('over missing vines and vines that are taken', () => {
    expect(reserves(without([2, 5]), [[2, 3], [2, 4], [3, 8]])).toEqual([[2, 6], [2, 7], [3, 7]]);
  });
  it('never from another zone', () => {
    expect(reserves(inZone(1), [[2, 5], [3, 5]])).toEqual([[2, 4], [3, 4]]);
    expect(reserves(inZone(2), [[4, 6]])).toEqual([[4, 7]]);
  });
  it('from the nearest row when the own row has none, ties to the lower row', () => {
    expect(reserves(without([3, 3], [3, 4], [3, 6], [3, 7], [3, 8]), [[3, 5]])).toEqual([[2, 5]]);
  });
  it('a row full of targets finds its reserves in the next row', () => {
    expect(reserves(eligible, [[2, 3], [2, 5], [2, 7], [2, 4], [2, 6], [2, 8]])).toEqual([[3, 3], [3, 5], [3, 7], [3, 4], [3, 6], [3, 8]]);
  });
  it('none when every eligible vine is a target', () => {
    expect(reserves([[2, 3], [2, 4]].map((pair) => indexOf(table, pair as [number, number])), [[2, 3], [2, 4]])).toEqual([null, null]);
  });
});

describe('the draw of a plan', () => {
  const table = regular(40, 60);
  const grid: GridFrame = { x0: 0, y0: 90, cellSizeM: 2, cols: 50, rows: 45 };
  const labels = Uint8Array.from({ length: 2250 }, (_, cell) => (cell % 50 < 20 ? 1 : cell % 50 < 38 ? 2 : 3));
  const zoneOfVine = labelVines(grid, labels, table);
  const nearBorder = vinesNearBorder({ grid, labels }, { ...table, zoneOfVine });
  const wanted = [{ zone: 1, count: 12 }, { zone: 2, count: 9 }, { zone: 3, count: 5 }];
  const request = { table, zoneOfVine, wanted, nearBorder };

  it('exactly the wanted number in each zone, no vine twice, reserves in the same zone and apart from targets', () => {
    for (let seed = 0; seed < 100; seed++) {
      for (const method of ['pivotal', 'systematic'] as const) {
        const draw = drawTargets({ ...request, seed, method });
        const targets = draw.flatMap((zone) => zone.targets.map(({ vine }) => vine));
        const reserves = draw.flatMap((zone) => zone.targets.map(({ reserve }) => reserve!));
        expect(draw.map((zone) => zone.targets.length)).toEqual([12, 9, 5]);
        expect(new Set([...targets, ...reserves]).size).toBe(52);
        for (const { zone, targets: drawn } of draw) {
          for (const { vine, reserve } of drawn) {
            expect([zoneOfVine[vine], zoneOfVine[reserve!]]).toEqual([zone, zone]);
          }
        }
      }
    }
  });

  it('the same seed draws the same vines, another seed others; one zone more leaves the others alone', () => {
    const first = drawTargets({ ...request, seed: 7 });
    expect(drawTargets({ ...request, seed: 7 })).toEqual(first);
    expect(drawTargets({ ...request, seed: 8 })).not.toEqual(first);
    const moreInTwo = drawTargets({ ...request, seed: 7, wanted: [wanted[0]!, { zone: 2, count: 14 }, wanted[2]!] });
    expect([moreInTwo[0], moreInTwo[2]]).toEqual([first[0], first[2]]);
    expect(moreInTwo[1]!.targets).toHaveLength(14);
  });

  it('targets keep a cell away from the border of their zone', () => {
    const bordersX = [40, 76];
    for (let seed = 0; seed < 100; seed++) {
      for (const { vine } of drawTargets({ ...request, seed }).flatMap((zone) => zone.targets)) {
        for (const border of bordersX) expect(Math.abs(table.x[vine]! - border)).toBeGreaterThanOrEqual(2 - 1e-9);
      }
    }
  });

  it('five vines in a zone lie in two places at least, nearly always in three, over 400 seeds', () => {
    let three = 0;
    for (let seed = 0; seed < 400; seed++) {
      const draw = drawTargets({ ...request, seed, wanted: [{ zone: 2, count: 5 }] })[0]!;
      expect(draw.places).toBeGreaterThanOrEqual(2);
      expect(draw.warnings).toEqual([]);
      if (draw.places >= 3) three++;
    }
    expect(three).toBeGreaterThan(390);
  });

  it('the order of targets is random: each place of the walk is as often first as last', () => {
    // mean draw order of the target with the lowest row, over 500 seeds, against its expectation (12 + 1) / 2
    let sum = 0;
    for (let seed = 0; seed < 500; seed++) {
      const { targets } = drawTargets({ ...request, seed, wanted: [wanted[0]!] })[0]!;
      sum += targets.reduce((low, target) => (target.vine < low.vine ? target : low)).drawOrder;
    }
    const sd = Math.sqrt((12 ** 2 - 1) / 12 / 500);
    expect(Math.abs(sum / 500 - 6.5)).toBeLessThan(4 * sd);
  });

  it('every eligible vine is drawn as often as any other: within 4 standard deviations over 10 000 seeds', () => {
    const small = regular(8, 12);
    const times = new Float64Array(small.count);
    let eligibleCount = 0;
    for (let seed = 0; seed < 10_000; seed++) {
      const draw = drawTargets({ table: small, zoneOfVine: new Uint8Array(small.count).fill(1), wanted: [{ zone: 1, count: 6 }], seed })[0]!;
      eligibleCount = draw.eligibleCount;
      for (const { vine } of draw.targets) times[vine]! += 1;
    }
    expect(eligibleCount).toBe(48);
    const expected = (10_000 * 6) / 48;
    const sd = Math.sqrt(expected * (1 - 6 / 48));
    const drawn = [...times].filter((count) => count > 0);
    expect(drawn).toHaveLength(48);
    for (const count of drawn) expect(Math.abs(count - expected)).toBeLessThan(4 * sd);
  });

  it('a zone too small gives what it has and says so; a zone without vines gives none', () => {
    const draw = drawTargets({ ...request, seed: 1, unusable: Uint8Array.from(all(table), (vine) => (zoneOfVine[vine] === 3 && vine % 100 !== 0 ? 1 : 0)), wanted: [{ zone: 3, count: 20 }, { zone: 9, count: 4 }] });
    const left = all(table).filter((vine) => zoneOfVine[vine] === 3 && vine % 100 === 0).length;
    expect(draw[0]!.targets).toHaveLength(left);
    expect(draw[0]!.warnings).toContainEqual({ code: 'tooFewVines', wanted: 20, drawn: left });
    expect(draw[0]!.relaxed).toEqual(['zoneBorder', 'endVines', 'edgeRows', 'allEnds']);
    expect(draw[1]).toMatchObject({ eligibleCount: 0, targets: [], places: 0 });
  });

  it('targets in one small spot are reported as one place', () => {
    expect(placeCount({ x: [0, 5, 20, 21], y: [0, 0, 0, 0] }, [0, 1, 2, 3], 15)).toBe(2);
    const spot = Uint8Array.from(all(table), (vine) => (table.row[vine]! < 4 && table.ordinal[vine]! < 6 ? 1 : 0));
    expect(drawTargets({ table, zoneOfVine: spot, wanted: [{ zone: 1, count: 5 }], seed: 3 })[0]!.warnings).toEqual([{ code: 'fewPlaces', places: 1, wanted: 2 }]);
  });

  it('5 000 eligible vines take well under a second', () => {
    const large = regular(60, 120);
    const started = performance.now();
    const draw = drawTargets({ table: large, zoneOfVine: new Uint8Array(large.count).fill(1), wanted: [{ zone: 1, count: 60 }], seed: 4 })[0]!;
    expect(draw.eligibleCount).toBe(58 * 116);
    expect(performance.now() - started).toBeLessThan(1000);
  });
});
