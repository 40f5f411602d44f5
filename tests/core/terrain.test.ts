import { describe, expect, it } from 'vitest';
import { elevationAt, pacedGround, type Terrain } from '../../shared/sampling/terrain.ts';
import { secondsAlong } from '../../shared/sampling/walkTime.ts';

/** A plane that rises `percent` to the east, on 40 × 20 cells of 2 m. */
function slope(percent: number): Terrain {
  const grid = { x0: 100, y0: 240, cellSizeM: 2, cols: 40, rows: 20 };
  return { grid, cells: Float32Array.from({ length: 800 }, (_, cell) => 50 + ((cell % 40) + 0.5) * 2 * (percent / 100)) };
}
const level = { kmPerHour: 3.6, onSlopes: true };

describe('elevation between cells', () => {
  it('is exact on a plane and keeps to the cells that are known', () => {
    const terrain = slope(10);
    expect(elevationAt(terrain, [121, 219])).toBeCloseTo(52.1, 5);
    expect(elevationAt(terrain, [122.4, 215.3])).toBeCloseTo(52.24, 5);
    // At the western edge there is no cell further out.
    expect(elevationAt(terrain, [100, 215])).toBeCloseTo(50.1, 5);
    expect(elevationAt(terrain, [60, 215])).toBeNaN();
    terrain.cells[10 * 40 + 10] = Number.NaN;
    expect(elevationAt(terrain, [121, 219])).toBeNaN();
    expect(elevationAt(terrain, [122, 218])).toBeGreaterThan(52);
  });
});

describe('walking at a chosen speed', () => {
  const way = (fromX: number, toX: number) => ({ fromXY: [fromX, 220] as [number, number], toXY: [toX, 220] as [number, number], lengthM: toX - fromX });

  it('is that speed on level ground and slower uphill in the proportions of the slope classes', () => {
    // 3.6 km/h is 1 m/s; at 10 % the class figures are 0.694 to 0.836 (Tobler 1993, from memory).
    expect(secondsAlong(way(110, 150), pacedGround(level, null))).toBeCloseTo(40, 9);
    expect(secondsAlong(way(110, 150), pacedGround(level, slope(0)))).toBeCloseTo(40, 9);
    expect(secondsAlong(way(110, 150), pacedGround(level, slope(10)))).toBeCloseTo(40 / (0.694 / 0.836), 6);
    expect(secondsAlong(way(110, 150), pacedGround({ kmPerHour: 1.8, onSlopes: true }, slope(10)))).toBeCloseTo(80 / (0.694 / 0.836), 6);
    expect(secondsAlong(way(110, 150), pacedGround({ kmPerHour: 3.6, onSlopes: false }, slope(10)))).toBeCloseTo(40, 9);
  });

  it('does not take the noise of one cell under a step between two rows for a slope', () => {
    const bumpy = slope(0);
    bumpy.cells[10 * 40 + 20] = 50.3;
    // 2.5 m across a bump of 0.3 m would be 12 %; over 10 m it is none.
    expect(secondsAlong(way(139, 141.5), pacedGround(level, bumpy))).toBeCloseTo(2.5, 6);
  });
});
