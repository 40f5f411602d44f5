import { describe, expect, it } from 'vitest';
import { numberSpots } from '../../server/exporters/report/reportMap.ts';
import type { MultiPolygonXY, XY } from '../../shared/geo/coordinates.ts';

/** Upright strips side by side, one point of paper to the metre. */
const strip = (west: number, east: number): MultiPolygonXY => [[[[west, 0], [east, 0], [east, 200], [west, 200], [west, 0]]]];
const toPaper = ([x, y]: XY): [number, number] => [x, 200 - y];

describe('numbers of zones on paper', () => {
  it('keep clear of each other in strips narrower than their rings, each in its own strip', () => {
    const zones = Array.from({ length: 6 }, (_, i) => ({ number: i + 1, shape: strip(12 * i, 12 * (i + 1)) }));
    const spots = numberSpots(zones, toPaper);
    expect(spots.map(({ number }) => number).sort()).toEqual([1, 2, 3, 4, 5, 6]);
    for (const { number, at } of spots) {
      expect(at[0]).toBeGreaterThan(12 * (number - 1));
      expect(at[0]).toBeLessThan(12 * number);
      for (const other of spots) if (other.number !== number) expect(Math.hypot(at[0] - other.at[0], at[1] - other.at[1])).toBeGreaterThan(18);
    }
  });

  it('stand in the ground, not in its hole', () => {
    const ring: MultiPolygonXY = [[[[0, 0], [100, 0], [100, 100], [0, 100], [0, 0]], [[20, 20], [20, 80], [80, 80], [80, 20], [20, 20]]]];
    const [x, y] = numberSpots([{ number: 1, shape: ring }], toPaper)[0]!.at;
    const north = 200 - y;
    expect(x > 20 && x < 80 && north > 20 && north < 80).toBe(false);
  });
});
