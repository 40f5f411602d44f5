import { describe, expect, it } from 'vitest';
import { defineGrid } from '../../shared/analysis/grid.ts';
import { OutlineCrosses, readOutline, shownPosition } from '../../shared/geo/outline.ts';
import { ringCrossing } from '../../shared/geo/outlineCrossing.ts';
import { fromUtm } from '../../shared/geo/utm.ts';

const at = (x: number, y: number): [number, number] => {
  const [lon, lat] = fromUtm([598_400 + x, 4_707_000 + y], 32630);
  return [lon, lat];
};
const ring = (...corners: [number, number][]) => [...corners, corners[0]!].map(([x, y]) => at(x, y));

describe('an outline', () => {
  it('of 120 by 80 m holds 0.96 ha on the plane of its UTM zone, whatever its winding', () => {
    const forward = readOutline({ type: 'Polygon', coordinates: [ring([0, 0], [120, 0], [120, 80], [0, 80])] });
    const backward = readOutline({ type: 'Polygon', coordinates: [ring([0, 80], [120, 80], [120, 0], [0, 0])] });
    expect(forward.areaM2).toBeCloseTo(9600, 0);
    expect(backward.areaM2).toBeCloseTo(9600, 0);
    expect(backward.epsg).toBe(32630);
    expect(backward.tidied).toEqual([]);
  });

  it('loses heights and repeated corners and is closed, and says so', () => {
    const open = [at(0, 0), at(0, 0), at(100, 0), at(100, 60), at(0, 60)].map((position) => [...position, 312]);
    const read = readOutline({ type: 'Polygon', coordinates: [open] });
    expect(read.tidied).toEqual([{ what: 'closed', count: 1 }, { what: 'repeatedCorners', count: 1 }, { what: 'heights', count: 5 }]);
    expect(read.polygons[0]![0]).toHaveLength(5);
    expect(read.areaM2).toBeCloseTo(6000, 0);
  });

  it('has the same grid before and after it was stored with eight decimals', () => {
    const read = readOutline({ type: 'Polygon', coordinates: [ring([0.123456, 0], [100, 0.777], [99.4321, 60], [0, 60.004999])] });
    const stored = read.polygons.map((rings) => rings.map((positions) => positions.map(([lon, lat]): [number, number] => [Number(lon.toFixed(8)), Number(lat.toFixed(8))])));
    expect(defineGrid(stored, 2).key).toBe(defineGrid(read.polygons, 2).key);
  });

  it('with a hole is smaller by the hole', () => {
    const read = readOutline({ type: 'Polygon', coordinates: [ring([0, 0], [100, 0], [100, 60], [0, 60]), ring([40, 20], [60, 20], [60, 40], [40, 40])] });
    expect(read.areaM2).toBeCloseTo(5600, 0);
  });

  it('that crosses itself is refused with the place and the corners', () => {
    const bow = { type: 'Polygon' as const, coordinates: [ring([0, 0], [100, 60], [100, 0], [0, 60])] };
    const error = catchFrom(() => readOutline(bow)) as OutlineCrosses;
    expect(error).toBeInstanceOf(OutlineCrosses);
    const [lon, lat] = at(50, 30);
    expect(error.place[0]).toBeCloseTo(lon, 6);
    expect(error.place[1]).toBeCloseTo(lat, 6);
    expect(error.corners).toEqual([1, 3]);
    expect(error.message).toContain(shownPosition([lon, lat]));
  });

  it.each([
    ['a line there and back', [[0, 0], [100, 0], [50, 0]]],
    ['a spike', [[0, 0], [100, 0], [100, 60], [100, 90], [100, 60.5], [0, 60]]],
    ['a corner on another edge', [[0, 0], [100, 0], [100, 60], [50, 0], [0, 60]]],
  ] as const)('with %s is refused', (_what, corners) => {
    const flat = [...corners, corners[0]].map(([x, y]) => [x / 1000, y / 1000] as [number, number]);
    expect(ringCrossing([flat])).not.toBeNull();
  });

  it('that only turns sharply is not refused', () => {
    expect(ringCrossing([ring([0, 0], [100, 0], [100, 60], [50, 1], [0, 60])])).toBeNull();
    const zigzag = Array.from({ length: 400 }, (_, i): [number, number] => [i, i % 2 === 0 ? 0 : 40]);
    expect(ringCrossing([ring(...zigzag, [400, 90], [0, 90])])).toBeNull();
  });

  it.each([
    ['too small', 5, 5, 'outlineTooSmall', /25\.0 m²/],
    ['too large', 4000, 3000, 'outlineTooLarge', /1200 ha/],
  ])('%s is refused with its area', (_what, width, height, code, words) => {
    const error = catchFrom(() => readOutline({ type: 'Polygon', coordinates: [ring([0, 0], [width, 0], [width, height], [0, height])] })) as { code: string; message: string };
    expect(error.code).toBe(code);
    expect(error.message).toMatch(words);
  });

  it('of two different corners is refused', () => {
    const error = catchFrom(() => readOutline({ type: 'Polygon', coordinates: [[at(0, 0), at(100, 0), at(100, 0), at(0, 0)]] })) as { code: string };
    expect(error.code).toBe('outlineTooFewCorners');
  });

  it('of 20 000 corners is checked in well under a second', () => {
    const circle = Array.from({ length: 19_998 }, (_, i): [number, number] => [300 * Math.cos((i / 19_998) * 2 * Math.PI), 300 * Math.sin((i / 19_998) * 2 * Math.PI)]);
    const before = performance.now();
    expect(readOutline({ type: 'Polygon', coordinates: [ring(...circle)] }).areaM2).toBeCloseTo(Math.PI * 90_000, -1);
    expect(performance.now() - before).toBeLessThan(2000);
  });
});

function catchFrom(work: () => unknown): unknown {
  try {
    work();
  } catch (error) {
    return error;
  }
  throw new Error('nothing was thrown');
}
