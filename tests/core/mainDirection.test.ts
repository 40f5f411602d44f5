import { describe, expect, it } from 'vitest';
import { mainDirection } from '../../shared/geo/mainDirection.ts';

// Degrees on the equator are the same length both ways, so bearings can be read off the numbers.
const ring = (...corners: [number, number][]) => [[[...corners, corners[0]!].map(([x, y]): [number, number] => [x / 1000, y / 1000])]];

describe('the main direction of an outline', () => {
  it.each([
    ['lying', ring([0, 0], [10, 0], [10, 3], [0, 3]), 90],
    ['standing', ring([0, 0], [3, 0], [3, 10], [0, 10]), 0],
    ['on the diagonal', ring([0, 0], [10, 10], [9, 11], [-1, 1]), 45],
    ['with a side of many short edges', ring([0, 0], [2, 0], [4, 0.05], [6, -0.05], [8, 0], [10, 0], [10, 3], [0, 3]), 90],
  ])('%s', (_what, outline, bearing) => expect(Math.abs(((mainDirection(outline)! - bearing + 270) % 180) - 90)).toBeLessThan(0.3));

  it('is not known for an outline without length', () => expect(mainDirection([[[[1, 1], [1, 1]]]])).toBeNull());
});
