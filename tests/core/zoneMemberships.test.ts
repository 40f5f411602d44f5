import { describe, expect, it } from 'vitest';
import { cellAt, cellCentre, gridOfOutline } from '../../shared/analysis/grid.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import { certaintyOf, confusionAt, joinedBands, membershipAt, membershipBands, NO_MEMBERSHIP, partedBands, WHOLE_MEMBERSHIP } from '../../shared/analysis/zoneMemberships.ts';
import { makeZoning } from '../../shared/analysis/zoning.ts';
import { featureTable } from '../../shared/analysis/zoningFit.ts';
import type { BlockInput, ZoningCandidate } from '../../shared/analysis/zoningTypes.ts';
import { zonedBlock } from '../bench/simulatedBlock.ts';

const simulated = zonedBlock({ areaHa: 2, cellSizeM: 4, random: seededRandom(12), k: 3, difficulty: 0.3, edgeM: 6 });
const layer = (cells: Float32Array) => ({ id: 'vigour', type: 'vigour', role: 'evidence' as const, kind: 'number' as const, cells, weight: null });
const holed = simulated.vigour.slice();
const hole = [...simulated.grid.inside.keys()].filter((cell) => simulated.grid.inside[cell] === 1)[100]!;
holed[hole] = Number.NaN;
const block: BlockInput = { grid: simulated.grid, layers: [layer(holed)] };
const options = { zones: 3, seed: 7, smallestPatchHa: 0.03, smoothingM: 0, memberships: true };

describe('memberships of cells', () => {
  const grid = gridOfOutline([[[[0, 0], [4, 0], [4, 1], [0, 1], [0, 0]]]], 32631, 1);
  const table = featureTable(grid, [Float32Array.from([1, 0, 1.5, Number.NaN])], false);
  const fit = { k: 2, centres: Float64Array.from([3, 0]), labels: new Uint8Array(3), inertia: 0, doubt: new Float32Array(3) };
  /** The second centre of the fit has the lower mean: it is zone 1. */
  const bands = membershipBands(table, fit, { fitted: [2, 1], cellCount: 4 })!;

  it('are 1 / Σ (d / d_j)², by hand for centres 0 and 3', () => {
    expect(bands.map((band) => [...band])).toEqual([[0.8 * WHOLE_MEMBERSHIP, WHOLE_MEMBERSHIP, WHOLE_MEMBERSHIP / 2, NO_MEMBERSHIP], [0.2 * WHOLE_MEMBERSHIP, 0, WHOLE_MEMBERSHIP / 2, NO_MEMBERSHIP]]);
    expect(membershipAt(bands, 0, 1)).toEqual({ zone: 1, share: 0.8, next: 2, nextShare: 0.2 });
    expect(membershipAt(bands, 3, 1)).toBeNull();
    expect(membershipAt(bands, 0, 0)).toBeNull();
  });

  it('are confused by 1 − (first − second), and a cell in another zone than its nearest is not certain', () => {
    expect([0, 1, 2].map((cell) => confusionAt(bands, cell))).toEqual([expect.closeTo(0.4, 9), 0, 1]);
    expect(confusionAt(bands, 3)).toBeNaN();
    expect(certaintyOf(membershipAt(bands, 0, 1)!)).toBeCloseTo(0.6, 9);
    expect(certaintyOf(membershipAt(bands, 0, 2)!)).toBe(0);
  });

  it('come back from the bytes they are joined to, and are none for one zone', () => {
    expect(partedBands(joinedBands(bands), 4)).toEqual(bands);
    expect(membershipBands(table, fit, { fitted: [2], cellCount: 4 })).toBeNull();
  });
});

/** Shares of a cell add to one and tell the same doubt as the zoning itself. */
function expectSound({ k, labels, doubt, memberships }: ZoningCandidate): void {
  expect(memberships).toHaveLength(k);
  let own = 0;
  for (const [cell, label] of labels.entries()) {
    const read = membershipAt(memberships!, cell, label);
    if (label === 0 || memberships![0]![cell] === NO_MEMBERSHIP) {
      expect(read).toBeNull();
      continue;
    }
    expect(Math.abs(memberships!.reduce((sum, band) => sum + band[cell]!, 0) - WHOLE_MEMBERSHIP)).toBeLessThanOrEqual(k / 2);
    // Clean-up and borders along rows move cells, which are wholly doubtful then.
    if (doubt[cell] === 1) continue;
    own += 1;
    expect(read!.share).toBeGreaterThanOrEqual(read!.nextShare);
    expect(Math.abs(read!.nextShare - doubt[cell]! * read!.share)).toBeLessThan(2 / WHOLE_MEMBERSHIP);
  }
  expect(own).toBeGreaterThan(0.5 * labels.filter((label) => label > 0).length);
}

describe('memberships of a zoning', () => {
  const result = makeZoning({ ...block, options });

  it('agree with its zones and doubts for every number, in the order of the zones', () => {
    for (const candidate of result.candidates.slice(1)) expectSound(candidate);
    expect(result.candidates[0]!.memberships).toBeNull();
  });

  it('are missing where a layer is', () => {
    expect(result.candidates[2]!.memberships!.map((band) => band[hole])).toEqual([NO_MEMBERSHIP, NO_MEMBERSHIP, NO_MEMBERSHIP]);
  });

  it('change nothing about the zones, and are not kept unless asked for', () => {
    const without = makeZoning({ ...block, options: { ...options, memberships: false } });
    expect(without.candidates.map(({ memberships }) => memberships)).toEqual([null, null, null, null, null, null]);
    expect(without.candidates.map(({ labels }) => labels)).toEqual(result.candidates.map(({ labels }) => labels));
  });

  it('come back onto the own cells of blocks zoned together, whatever the size of the others’', () => {
    const east = (cellSizeM: number): BlockInput => {
      const grid = gridOfOutline(simulated.grid.outlineXY.map((polygon) => polygon.map((ring) => ring.map(([x, y]): [number, number] => [x + 2000, y]))), 32631, cellSizeM);
      return { grid, layers: [layer(Float32Array.from(grid.inside, (inside, cell) => (inside === 0 ? Number.NaN : (simulated.vigour[cellAt(simulated.grid, [cellCentre(grid, cell)[0] - 2000, cellCentre(grid, cell)[1]])] ?? Number.NaN))))] };
    };
    for (const cellSizeM of [4, 6]) {
      const { candidates } = makeZoning({ ...block, options, together: [east(cellSizeM)] });
      for (const candidate of candidates.slice(1)) {
        expect(candidate.memberships![0]).toHaveLength(simulated.grid.inside.length);
        expectSound(candidate);
      }
    }
  });
});
