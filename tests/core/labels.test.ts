import { describe, expect, it } from 'vitest';
import { cellsPerLabel, highestLabel, majorityFiltered, meanPerLabel, numbersByMean, relabelled } from '../../shared/analysis/labels.ts';
import { allReachWidth, wideShare } from '../../shared/analysis/labelsWidth.ts';
import { randomIndex, seededRandom } from '../../shared/analysis/random.ts';
import { cellsForArea, sieveByBorder, sieveByLargestNeighbour, smallPatches } from '../../shared/analysis/sieve.ts';
import { eachContact, findPatches } from '../../shared/analysis/sievePatches.ts';
import { eachPatchContact, patchRuns } from '../../shared/analysis/sieveRuns.ts';
import { picture, shown } from './pictures.ts';

describe('labels', () => {
  const { labels, cols } = picture('112 .32 332');

  it('are counted and averaged, cells outside and without a value left out', () => {
    expect(highestLabel(labels)).toBe(3);
    expect(Array.from(cellsPerLabel(labels))).toEqual([1, 2, 3, 3]);
    const layer = Float32Array.from([1, 3, 10, 99, 5, NaN, 6, 7, 20]);
    expect(Array.from(meanPerLabel(labels, layer))).toEqual([99, 2, 15, 6]);
  });

  it('are renumbered so that 1 has the lowest mean, without gaps, gaps in the layer last', () => {
    const layer = Float32Array.from([9, 9, 1, 0, 4, 1, 4, 4, 1]);
    expect(shown(relabelled(labels, numbersByMean(labels, layer)), cols)).toBe('331 .21 221');
    const spread = relabelled(labels, [0, 7, 2, 5]);
    expect(shown(relabelled(spread, numbersByMean(spread, layer)), cols)).toBe('331 .21 221');
    expect(Array.from(numbersByMean(labels, Float32Array.from([NaN, NaN, 1, 0, 4, 1, 4, 4, 1])))).toEqual([0, 3, 1, 2]);
  });
});

describe('the majority filter', () => {
  it('gives each cell the most frequent label around it, and leaves ties and the ground outside alone', () => {
    const { labels, cols } = picture('11122 12122 11222 ..322');
    expect(shown(majorityFiltered(labels, cols), cols)).toBe('11122 11222 11222 ..222');
    const tie = picture('12 12');
    expect(shown(majorityFiltered(tie.labels, 2), 2)).toBe('12 12');
  });

  // Second method: counting with a map, cell by cell.
  it('agrees with counting every neighbourhood', () => {
    const random = seededRandom(4);
    const [cols, rows] = [17, 13];
    const labels = Uint8Array.from({ length: cols * rows }, () => randomIndex(random, 5));
    const before = labels.slice();
    const filtered = majorityFiltered(labels, cols);
    labels.forEach((own, cell) => {
      if (own === 0) return expect(filtered[cell]).toBe(0);
      const votes = new Map<number, number>();
      for (let near = 0; near < labels.length; near++) {
        const [right, down] = [(near % cols) - (cell % cols), Math.floor(near / cols) - Math.floor(cell / cols)];
        if (Math.abs(right) <= 1 && Math.abs(down) <= 1 && labels[near]! > 0) votes.set(labels[near]!, (votes.get(labels[near]!) ?? 0) + 1);
      }
      const most = Math.max(...votes.values());
      const winners = [...votes.keys()].filter((label) => votes.get(label) === most);
      expect(filtered[cell]).toBe(winners.length === 1 ? winners[0] : own);
    });
    expect(labels).toEqual(before);
  });

  it('passed several times is the filter of what it left', () => {
    const random = seededRandom(6);
    for (const [cols, rows] of [[1, 9], [9, 1], [23, 19]] as const) {
      const labels = Uint8Array.from({ length: cols * rows }, () => randomIndex(random, 4));
      const twice = majorityFiltered(majorityFiltered(labels, cols), cols);
      if (cols === 23) expect(twice).not.toEqual(majorityFiltered(labels, cols));
      expect(majorityFiltered(labels, cols, 2)).toEqual(twice);
      expect(majorityFiltered(labels, cols, 3)).toEqual(majorityFiltered(twice, cols));
    }
  });
});

describe('patches', () => {
  const { labels, cols } = picture('111122 131122 111222 112221 312222 331222');

  it('are found across edges, or across corners too', () => {
    const sizes = (connectivity: 4 | 8) => {
      const patches = findPatches(labels, cols, connectivity);
      return Array.from(patches.sizes, (size, patch) => `${patches.labels[patch]}:${size}`).sort();
    };
    expect(sizes(4)).toEqual(['1:1', '1:1', '1:13', '2:17', '3:1', '3:3']);
    expect(sizes(8)).toEqual(['1:1', '1:14', '2:17', '3:1', '3:3']);
  });

  // Second method: cell by cell instead of run by run.
  it('of runs and their contacts are those of cells', () => {
    const random = seededRandom(8);
    for (const [width, height] of [[1, 12], [12, 1], [13, 11], [30, 20]] as const) {
      const mixed = Uint8Array.from({ length: width * height }, () => randomIndex(random, 4));
      const [runs, patches] = [patchRuns(mixed, width), findPatches(mixed, width)];
      expect([runs.sizes, runs.labels]).toEqual([patches.sizes, patches.labels]);
      const [byRuns, byCells] = [new Map<string, number>(), new Map<string, number>()];
      const add = (lengths: Map<string, number>, a: number, b: number, edges: number) => lengths.set(`${Math.min(a, b)} ${Math.max(a, b)}`, (lengths.get(`${Math.min(a, b)} ${Math.max(a, b)}`) ?? 0) + edges);
      eachPatchContact(runs, (a, b, edges) => add(byRuns, a, b, edges));
      eachContact(patches, width, 4, (a, b) => add(byCells, a, b, 1));
      expect([...byRuns].sort()).toEqual([...byCells].sort());
    }
  });

  it('below a minimum are listed with a cell to show them by', () => {
    expect(smallPatches(labels, cols, { minCells: 3 })).toEqual([
      { label: 3, cells: 1, firstCell: 7 },
      { label: 1, cells: 1, firstCell: 23 },
      { label: 1, cells: 1, firstCell: 32 },
    ]);
  });
});

describe('the sieve by largest neighbour', () => {
  const { labels, cols } = picture('111122 131122 111222 112221 312222 331222');

  // Source: SieveFilter of GDAL 3.6.2 on the same grid.
  it.each([
    [2, 4, '111122 111122 111222 112222 312222 332222'],
    [4, 4, '111122 111122 111222 112222 112222 112222'],
    [4, 8, '111122 111122 111222 112222 212222 221222'],
  ] as const)('with a minimum of %i cells, %i-connected, agrees with GDAL', (minCells, connectivity, expected) => {
    expect(shown(sieveByLargestNeighbour(labels, cols, { minCells, connectivity }), cols)).toBe(expected);
  });

  it('passes through neighbours that are small too', () => {
    // Class 2 is small, its largest neighbour 3 as well; the largest neighbour of 3 is the big 1.
    const chain = picture('111113322');
    expect(shown(sieveByLargestNeighbour(chain.labels, 9, { minCells: 3 }), 9)).toBe('111111111');
  });
});

describe('the sieve by longest border', () => {
  const sieved = (text: string, minCells: number) => {
    const { labels, cols } = picture(text);
    return shown(sieveByBorder(labels, cols, { minCells }), cols);
  };

  it('joins a patch below the minimum to the neighbour with the longest border, not to the largest', () => {
    // The 3 meets label 1 along three edges and the larger 2 along one.
    expect(sieved('1122222 1322222 1122222', 2)).toBe('1122222 1122222 1122222');
  });

  it('prefers the larger of two neighbours on a tie, then the lower label', () => {
    expect(sieved('1113222222', 2)).toBe('1112222222');
    expect(sieved('2223111', 2)).toBe('2221111');
  });

  it('lets small patches grow together before they are judged', () => {
    // Smallest first, the 4 joins a 3, which makes one patch of five cells: large enough to stay.
    expect(sieved('1133433222', 3)).toBe('3333333222');
    expect(sieved('11111133433222', 5)).toBe('11111133333333');
  });

  it('leaves the ground outside alone, and a part of the block that is too small but has no neighbour', () => {
    expect(sieved('11.2.33311', 3)).toBe('11.2.33333');
    expect(sieved('11112.', 2)).toBe('11111.');
  });

  it('leaves no patch below the minimum, changes no cell outside, and changes nothing when repeated', () => {
    for (let seed = 1; seed <= 20; seed++) {
      const random = seededRandom(seed);
      const cols = 30;
      const labels = Uint8Array.from({ length: cols * 20 }, (_, cell) => (cell % cols === 11 ? 0 : 1 + randomIndex(random, 4)));
      const before = labels.slice();
      const minCells = 2 + randomIndex(random, 12);
      const clean = sieveByBorder(labels, cols, { minCells });
      expect(smallPatches(clean, cols, { minCells })).toEqual([]);
      expect(Array.from(clean, (label) => label === 0)).toEqual(Array.from(labels, (label) => label === 0));
      expect(sieveByBorder(clean, cols, { minCells })).toEqual(clean);
      expect(labels).toEqual(before);
    }
  });

  it('knows how many cells an area is, rounded up', () => {
    expect(cellsForArea(0.05, 2)).toBe(125);
    expect(cellsForArea(0.05, 3)).toBe(56);
    expect(cellsForArea(0, 2)).toBe(0);
  });
});

describe('the width of zones', () => {
  it('is judged by the disc that fits in: a strip of two cells is wide enough for two, not for four', () => {
    const { labels, cols } = picture('111221111 111221111 111221111 111221111 111221111 111221111');
    expect(wideShare(labels, cols, { widthM: 2, cellSizeM: 1 })[2]).toBe(1);
    expect(wideShare(labels, cols, { widthM: 4, cellSizeM: 1 })[2]).toBe(0);
    expect(wideShare(labels, cols, { widthM: 4, cellSizeM: 2 })[2]).toBe(1);
  });

  it('is reached by every zone, or not, as the share says', () => {
    const { labels, cols } = picture('111221111 111221111 111221111 111221111 111221111 111221111 111221111');
    for (const widthM of [2, 3, 4, 5]) expect(allReachWidth(labels, cols, { widthM, cellSizeM: 1 })).toBe(wideShare(labels, cols, { widthM, cellSizeM: 1 })[2]! > 0);
    expect(allReachWidth(labels, cols, { widthM: 4, cellSizeM: 2 })).toBe(true);
    const edge = picture('1 1 1 1');
    expect(allReachWidth(edge.labels, edge.cols, { widthM: 6, cellSizeM: 1 })).toBe(true);
  });

  it('does not count the edge of the block against a zone', () => {
    const { labels, cols } = picture('1 1 1 1');
    expect(Array.from(wideShare(labels, cols, { widthM: 6, cellSizeM: 1 }))).toEqual([NaN, 1]);
  });

  it('counts the part that is wide enough', () => {
    // A head of 5 × 5 cells with a tail one cell wide: the tail is lost, the head's corners too.
    const { labels, cols } = picture('2222222222222 2222222222222 2211111222222 2211111222222 2211111111111 2211111222222 2211111222222 2222222222222 2222222222222');
    const share = wideShare(labels, cols, { widthM: 5, cellSizeM: 1 })[1]!;
    expect(share * 31).toBeGreaterThanOrEqual(21);
    expect(share * 31).toBeLessThanOrEqual(27);
  });
});
