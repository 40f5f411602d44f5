import { describe, expect, it } from 'vitest';
import { seededRandom } from '../../shared/analysis/random.ts';
import { splitWalk } from '../../shared/sampling/splitWalk.ts';
import { shortestWalk } from '../../shared/sampling/walk.ts';
import { chainBlocks } from '../../shared/sampling/walkChain.ts';
import { secondsAlong, speedOnSlope, twoWaySpeed, USUAL_PACE } from '../../shared/sampling/walkTime.ts';
import { gateOf, layoutOf, targetsOf, walkCases } from './walkCases.ts';

/** Closed walk at 0.84 m/s and 60 s a vine. */
function loads(id: 'W2' | 'W3') {
  const aisles = walkCases[id]!;
  const targets = targetsOf(aisles);
  const loadOf = (from: number, to: number): number =>
    shortestWalk({ layout: layoutOf(aisles), targets: targets.slice(from, to), start: gateOf(aisles), end: 'start' }).lengthM / 0.84 + 60 * (to - from);
  return { targetCount: targets.length, loadOf };
}
const rounded = (values: readonly number[]) => values.map((value) => Number(value.toFixed(3)));

// loads and cuts: Python prototype, each walk checked by Held-Karp
describe('a walk shared among people', () => {
  it.each([
    ['W2', 1, [], [615.714], true],
    ['W2', 2, [4], [325.714, 328.095], true],
    ['W2', 3, [2, 5], [193.81, 246.667, 265.714], false],
    ['W3', 1, [], [626.429], true],
    ['W3', 2, [4], [336.429, 366.19], true],
  ] as const)('%s for %d: cuts and loads', (id, people, cuts, expected, isEven) => {
    const split = splitWalk({ ...loads(id), people });
    expect(split.cuts).toEqual(cuts);
    expect(rounded(split.loads)).toEqual(expected);
    expect(split.isEven).toBe(isEven);
  });

  it('W3 for three: the least possible largest load, and no even sharing', () => {
    const split = splitWalk({ ...loads('W3'), people: 3 });
    expect(split.cuts).toEqual([3, 5]);
    expect(Math.max(...split.loads)).toBeCloseTo(291.905, 3);
    expect(split.isEven).toBe(false);
  });

  it('agrees with trying every cut: least largest load, and even whenever some sharing is', () => {
    const random = seededRandom(3);
    for (let round = 0; round < 200; round++) {
      const weights = Array.from({ length: 4 + Math.floor(random() * 7) }, () => 1 + Math.floor(random() * 30));
      const people = 2 + Math.floor(random() * 2);
      const loadOf = (from: number, to: number) => 10 + weights.slice(from, to).reduce((sum, weight) => sum + weight, 0);
      const split = splitWalk({ targetCount: weights.length, people, loadOf });
      const every = everySharing(weights.length, people).map((cuts) => [...cuts, weights.length].map((to, i) => loadOf(cuts[i - 1] ?? 0, to)));
      const isEven = (shares: readonly number[]) => Math.max(...shares) <= 1.15 * Math.min(...shares);
      // limits go up in steps of 1 %, so a sharing that is only just even may be missed; one even with room to spare may not
      const clearlyEven = every.some((shares) => Math.max(...shares) * 1.01 <= 1.15 * Math.min(...shares));
      expect(split.loads).toHaveLength(people);
      if (split.isEven) expect(isEven(split.loads)).toBe(true);
      else {
        expect(clearlyEven).toBe(false);
        const leastLargest = Math.min(...every.map((shares) => Math.max(...shares)));
        expect(Math.max(...split.loads)).toBe(leastLargest);
        expect(Math.min(...split.loads)).toBe(Math.max(...every.filter((shares) => Math.max(...shares) === leastLargest).map((shares) => Math.min(...shares))));
      }
    }
  });

  it('more people than targets are refused', () => {
    expect(() => splitWalk({ targetCount: 2, people: 3, loadOf: () => 1 })).toThrow(/send at most 2/);
    expect(() => splitWalk({ targetCount: 2, people: 0, loadOf: () => 1 })).toThrow(/whole number from 1/);
  });
});

function everySharing(count: number, people: number, from = 0): number[][] {
  if (people === 1) return [[]];
  const out: number[][] = [];
  for (let cut = from + 1; cut <= count - people + 1; cut++) for (const rest of everySharing(count, people - 1, cut)) out.push([cut, ...rest]);
  return out;
}

describe('walking speed', () => {
  // the hiking function's harmonic mean times 0.6, computed in Python
  it.each([[0, 0.8395], [5, 0.8268], [10, 0.694], [20, 0.4891], [30, 0.3446], [40, 0.2429]])('on a slope of %d percent is %d m/s', (slope, speed) => {
    expect(twoWaySpeed(slope)).toBeCloseTo(speed, 4);
    expect(twoWaySpeed(-slope)).toBeCloseTo(speed, 4);
  });

  it('the class figures are those of the middle of each class', () => {
    for (const [slope, speed] of [[2.5, 0.836], [10, 0.694], [22.5, 0.448], [40, 0.243]] as const) {
      expect(Number(twoWaySpeed(slope).toFixed(3))).toBe(speed);
      expect(speedOnSlope(slope)).toBe(speed);
      expect(speedOnSlope(-slope)).toBe(speed);
    }
    expect([4.99, 5, 15, 30, 80].map((slope) => speedOnSlope(slope))).toEqual([0.836, 0.694, 0.448, 0.243, 0.243]);
  });

  it('a way over a crest is as slow as its slopes, although its ends are level', () => {
    const way = { fromXY: [0, 0], toXY: [40, 0], lengthM: 40 } as const;
    const crest = ([x]: readonly [number, number]) => 4 - 0.2 * Math.abs(x - 20);
    expect(secondsAlong(way, { elevationM: crest })).toBeCloseTo(40 / 0.448, 9);
    expect(secondsAlong(way, {})).toBeCloseTo(40 / 0.836, 9);
    expect(secondsAlong(way, { elevationM: () => Number.NaN })).toBeCloseTo(40 / 0.836, 9);
    expect(secondsAlong(way, { pace: [{ belowPercent: Infinity, speedMS: 1 }] })).toBe(40);
    expect(USUAL_PACE).toHaveLength(4);
  });
});

describe('several blocks in one round', () => {
  const position = [[0, 0], [10, 0], [0, 10], [10, 10]] as const;
  const gateXY = (block: number, gate: number): readonly [number, number] => [position[block]![0] + gate, position[block]![1]];
  const input = (random: () => number) => {
    const own = Array.from({ length: 4 * 2 * 2 }, () => Math.floor(random() * 20));
    const at = (where: { block: number; gate: number } | null) => (where === null ? ([5, -3] as const) : gateXY(where.block, where.gate));
    return {
      gateCounts: [2, 1, 2, 2],
      walkCost: (block: number, gateIn: number, gateOut: number) => own[block * 4 + gateIn * 2 + gateOut]!,
      travelCost: (from: { block: number; gate: number } | null, to: { block: number; gate: number } | null) => Math.hypot(at(from)[0] - at(to)[0], at(from)[1] - at(to)[1]),
    };
  };
  const costOf = (chain: ReturnType<typeof input>, visits: readonly { block: number; gateIn: number; gateOut: number }[]) => {
    let cost = 0;
    let at: { block: number; gate: number } | null = null;
    for (const { block, gateIn, gateOut } of visits) {
      cost += chain.travelCost(at, { block, gate: gateIn }) + chain.walkCost(block, gateIn, gateOut);
      at = { block, gate: gateOut };
    }
    return cost + chain.travelCost(at, null);
  };

  it('order and gates are the cheapest of all', () => {
    const random = seededRandom(8);
    for (let round = 0; round < 20; round++) {
      const chain = input(random);
      const found = chainBlocks(chain);
      let least = Infinity;
      const tryAll = (done: { block: number; gateIn: number; gateOut: number }[]): void => {
        if (done.length === 4) least = Math.min(least, costOf(chain, done));
        for (let block = 0; block < 4; block++) {
          if (done.some((visit) => visit.block === block)) continue;
          for (let gateIn = 0; gateIn < chain.gateCounts[block]!; gateIn++) {
            for (let gateOut = 0; gateOut < chain.gateCounts[block]!; gateOut++) tryAll([...done, { block, gateIn, gateOut }]);
          }
        }
      };
      tryAll([]);
      expect(found.cost).toBeCloseTo(least, 9);
      expect(costOf(chain, found.visits)).toBeCloseTo(found.cost, 9);
      const kept = chainBlocks({ ...chain, keepOrder: true });
      expect(kept.visits.map(({ block }) => block)).toEqual([0, 1, 2, 3]);
      expect(kept.cost).toBeGreaterThanOrEqual(found.cost - 1e-9);
    }
  });

  it('no block is no round; too many to search are refused unless their order is given', () => {
    expect(chainBlocks({ ...input(seededRandom(1)), gateCounts: [] })).toEqual({ visits: [], cost: 0 });
    const many = { gateCounts: Array<number>(30).fill(1), walkCost: () => 1, travelCost: () => 1 };
    expect(() => chainBlocks(many)).toThrow(/give the order/);
    expect(chainBlocks({ ...many, keepOrder: true }).cost).toBe(61);
  });
});
