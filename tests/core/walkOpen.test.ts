import { describe, expect, it } from 'vitest';
import { seededRandom } from '../../shared/analysis/random.ts';
import type { XY } from '../../shared/geo/coordinates.ts';
import { openOrder } from '../../shared/sampling/walkOpen.ts';

const lengthOf = (points: readonly XY[], order: readonly number[], start: XY, end: XY | null): number => {
  const way = [start, ...order.map((index) => points[index]!), ...(end === null ? [] : [end])];
  return way.slice(1).reduce((sum, [x, y], i) => sum + Math.hypot(x - way[i]![0], y - way[i]![1]), 0);
};

/** The shortest of all orders, by trying each. */
function shortest(points: readonly XY[], start: XY, end: XY | null): number {
  let best = Infinity;
  const walk = (order: number[]): void => {
    if (order.length === points.length) best = Math.min(best, lengthOf(points, order, start, end));
    else for (const index of points.keys()) if (!order.includes(index)) walk([...order, index]);
  };
  walk([]);
  return best;
}

describe('an order past points in the open', () => {
  it('takes each point once and is seldom longer than the shortest of all orders, never shorter', () => {
    const random = seededRandom(5);
    const excess: number[] = [];
    for (let round = 0; round < 60; round++) {
      const points = Array.from({ length: 6 }, (): XY => [200 * random(), 100 * random()]);
      const [start, end] = [[0, 0] as const, round % 2 === 0 ? ([0, 0] as const) : null];
      const order = openOrder(points, start, end);
      expect([...order].sort()).toEqual([0, 1, 2, 3, 4, 5]);
      excess.push(lengthOf(points, order, start, end) / shortest(points, start, end) - 1);
    }
    expect(Math.min(...excess)).toBeGreaterThan(-1e-12);
    // 2-opt ends about 5 % above the shortest tour (Johnson & McGeoch 1997, Local Search in Combinatorial Optimization, ch. 8).
    expect(excess.reduce((sum, one) => sum + one, 0) / excess.length).toBeLessThan(0.05);
    expect(Math.max(...excess)).toBeLessThan(0.25);
  });

  it('goes round a square without crossing itself, and once past many points at about the length of a random tour', () => {
    const corners: XY[] = [[0, 10], [10, 0], [10, 10]];
    expect(lengthOf(corners, openOrder(corners, [0, 0], [0, 0]), [0, 0], [0, 0])).toBe(40);
    const random = seededRandom(11);
    const points = Array.from({ length: 300 }, (): XY => [1000 * random(), 1000 * random()]);
    // The shortest tour past n points by lot in an area A tends to 0.7124 √(nA) (Beardwood, Halton & Hammersley 1959; constant of Applegate et al. 2006), and lies a little above it for few.
    const ratio = lengthOf(points, openOrder(points, points[0]!, points[0]!), points[0]!, points[0]!) / (0.7124 * Math.sqrt(300 * 1e6));
    expect(ratio).toBeGreaterThan(1);
    expect(ratio).toBeLessThan(1.15);
  });

  it('is empty for no point, and the same for the same points', () => {
    expect(openOrder([], [0, 0], null)).toEqual([]);
    const points: XY[] = [[5, 5], [5, 5], [1, 1]];
    expect(openOrder(points, [0, 0], null)).toEqual([2, 0, 1]);
  });
});
