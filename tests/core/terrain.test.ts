import { describe, expect, it } from 'vitest';
import { elevationAt, pacedGround, type Terrain } from '../../shared/sampling/terrain.ts';
import { metresBySlope, secondsAlong } from '../../shared/sampling/walkTime.ts';

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

  it('takes other proportions where somebody timed their own', () => {
    const own = { ...level, slopeSpeeds: [0.9, 0.6, 0.4] as [number, number, number] };
    // 40 m at 1 m/s, of which 0.9 is left at 10 %, 0.6 at 20 % and 0.4 at 35 %.
    const at = (percent: number) => secondsAlong(way(110, 150), pacedGround(own, slope(percent)));
    expect(at(0)).toBeCloseTo(40, 9);
    expect(at(10)).toBeCloseTo(40 / 0.9, 6);
    expect(at(20)).toBeCloseTo(40 / 0.6, 6);
    expect(at(35)).toBeCloseTo(100, 6);
  });

  it('counts the metres of a way by how steep they are', () => {
    // Level for 20 m, then 20 %: read every 10 m.
    const bent = slope(0);
    for (let cell = 0; cell < 800; cell++) bent.cells[cell] = 50 + Math.max(0, ((cell % 40) + 0.5) * 2 - 40) * 0.2;
    const ground = pacedGround(level, bent);
    const metres = metresBySlope(way(120, 160), ground.elevationM);
    expect(metres.map((part) => Math.round(part * 1e6) / 1e6)).toEqual([20, 0, 20, 0]);
    expect(metresBySlope(way(120, 160), undefined)).toEqual([40, 0, 0, 0]);
  });

  it('does not take the noise of one cell under a step between two rows for a slope', () => {
    const bumpy = slope(0);
    bumpy.cells[10 * 40 + 20] = 50.3;
    // 2.5 m across a bump of 0.3 m would be 12 %; over 10 m it is none.
    expect(secondsAlong(way(139, 141.5), pacedGround(level, bumpy))).toBeCloseTo(2.5, 6);
  });
});
