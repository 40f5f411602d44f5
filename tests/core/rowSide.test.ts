import { describe, expect, it } from 'vitest';
import type { MultiPolygonXY, XY } from '../../shared/geo/coordinates.ts';
import { lineBearing } from '../../shared/geo/rowFrame.ts';
import { layRows } from '../../shared/geo/rowsLayout.ts';
import { vineXY } from '../../shared/geo/vines.ts';
import { alleySideOf, alleySides, sideFor } from '../../shared/sampling/rowSide.ts';
import { walkBlock } from '../../shared/sampling/walkBlock.ts';

const frame = (bearing: number) => ({ originXY: [0, 0] as XY, gridBearingDeg: lineBearing(bearing) });
const square: MultiPolygonXY = [[[[0, 0], [100, 0], [100, 100], [0, 100], [0, 0]]]];

describe('the side of a row', () => {
  // Low s lies west for bearings of 0 to 45 degrees, north to 135, east to 180: the table of sides of the frame.
  it.each([
    [0, { west: 'low', east: 'high', north: 'either', south: 'either' }],
    [30, { west: 'low', east: 'high', north: 'low', south: 'high' }],
    [90, { north: 'low', south: 'high', east: 'either', west: 'either' }],
    [150, { east: 'low', west: 'high', north: 'low', south: 'high' }],
    [175, { east: 'low', west: 'high', north: 'either', south: 'either' }],
  ] as const)('in rows that run at %d degrees', (bearing, sides) => {
    for (const [point, side] of Object.entries(sides)) expect([point, alleySideOf(frame(bearing), point as keyof typeof sides)]).toEqual([point, side]);
    expect(alleySideOf(frame(bearing), 'either')).toBe('either');
  });

  it('is the one that a measure read at the vine asks for', () => {
    const sides = alleySides(frame(0), [{ code: 'rot', rowSide: 'east' }, { code: 'sun', rowSide: 'south' }, { code: 'brix', rowSide: 'either' }, { code: 'old' }]);
    expect(sides).toEqual({ rot: 'high' });
    expect(sideFor(['brix', 'rot'], sides)).toBe('high');
    expect(sideFor(['brix', 'old'], sides)).toBe('either');
  });

  it.each([0, 40, 90, 140])('a walk stands on that side of every vine, rows at %d degrees', (bearing) => {
    const rows = layRows(square, frame(bearing), { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM: 4 });
    const chosen = [3, 7, 11, 18, 25].map((rowIndex) => ({ rowIndex, ordinal: 5 }));
    for (const point of ['north', 'east', 'south', 'west'] as const) {
      const side = alleySideOf(rows.frame, point);
      if (side === 'either') continue;
      const { walk, layout } = walkBlock({ rows, vines: chosen.map((vine) => ({ ...vine, side })), gateXY: [50, -5] });
      expect(walk.stops).toHaveLength(chosen.length);
      for (const { target, alley } of walk.stops) {
        const { rowIndex, ordinal } = chosen[target]!;
        const t = layout.alleys[alley]!;
        const [x, y] = vineXY(rows.rows[rowIndex]!, ordinal)!;
        // From the vine to the middle of the alley, on the axes of the compass.
        const across = t.s - rows.rows[rowIndex]!.s;
        const radians = (rows.frame.gridBearingDeg * Math.PI) / 180;
        const [east, north] = [across * Math.cos(radians), -across * Math.sin(radians)];
        expect({ north, east, south: -north, west: -east }[point], `vine at ${x}, ${y}`).toBeGreaterThan(0);
      }
      const free = walkBlock({ rows, vines: chosen, gateXY: [50, -5] });
      expect(walk.lengthM).toBeGreaterThanOrEqual(free.walk.lengthM - 1e-9);
    }
  });
});
