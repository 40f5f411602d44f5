import { describe, expect, it } from 'vitest';
import { planChoices, type PlanChoicesInput } from '../../shared/contracts/planChoices.ts';
import type { WalkExpected } from '../../shared/contracts/planBasis.ts';
import type { MultiPolygonXY, XY } from '../../shared/geo/coordinates.ts';
import { lineBearing } from '../../shared/geo/rowFrame.ts';
import { layRows } from '../../shared/geo/rowsLayout.ts';
import { vineTable } from '../../shared/geo/vines.ts';
import { drawTargets } from '../../shared/sampling/targets.ts';
import { walkBlock } from '../../shared/sampling/walkBlock.ts';
import { trialWalks, walksAsLaid, walkSeconds } from '../../shared/sampling/walkEstimate.ts';

const pace = (facts: PlanChoicesInput['pace'] = {}) => planChoices.parse({ measures: [{ code: 'brix' }], pace: facts }).pace;
const level = (vines: number, seconds: number): WalkExpected => ({ vines, levelS: seconds, slopedS: 2 * seconds });

describe('the walk before its vines are drawn', () => {
  it('follows a power of the count between two trial walks and beyond them', () => {
    const walks = [level(4, 100), level(16, 200)];
    const usual = pace({ onSlopes: false, kmPerHour: 3.0096 });
    // seconds double as the count grows fourfold: a square root; 0.836 m/s is 3.0096 km/h
    expect(walkSeconds(walks, 4, usual)).toBeCloseTo(100, 1);
    expect(walkSeconds(walks, 9, usual)).toBeCloseTo(150, 1);
    expect(walkSeconds(walks, 64, usual)).toBeCloseTo(400, 1);
    expect(walkSeconds(walks, 1, usual)).toBeCloseTo(50, 1);
    expect(walkSeconds(walks, 0, usual)).toBe(0);
    expect(walkSeconds([], 9, usual)).toBe(0);
  });

  it('half the speed takes twice the time, and slopes count only where they are asked for', () => {
    const walks = [level(4, 100), level(16, 200)];
    const at = (facts: PlanChoicesInput['pace']) => walkSeconds(walks, 10, pace(facts));
    expect(at({ kmPerHour: 1.5 }) / at({ kmPerHour: 3 })).toBeCloseTo(2, 12);
    expect(at({ onSlopes: true }) / at({ onSlopes: false })).toBeCloseTo(2, 12);
  });

  it('never falls as the count grows, and gives a laid walk its own time at its own count', () => {
    const walks = [level(6, 900), level(25, 880), level(90, 4000)];
    const usual = pace();
    const seconds = Array.from({ length: 120 }, (_, i) => walkSeconds(walks, i, usual));
    seconds.slice(1).forEach((value, i) => expect(value).toBeGreaterThanOrEqual(seconds[i]! - 1e-9));
    const laid = walksAsLaid(walks, { vines: 41, walkingS: 1234 }, usual);
    expect(walkSeconds(laid, 41, usual)).toBeCloseTo(1234, 9);
    expect(walkSeconds(laid, 41, pace({ kmPerHour: usual.kmPerHour / 2 }))).toBeCloseTo(2468, 9);
  });

  it.each([
    ['a small rectangle', [[0, 0], [120, 0], [120, 80], [0, 80]]],
    ['a long one with its rows across', [[0, 0], [60, 0], [60, 300], [0, 300]]],
    ['an oblique one of four hectares', [[0, 0], [200, 30], [230, 220], [20, 190]]],
  ] as [string, XY[]][])('%s: within a fifth of the walks that drawn vines then take', (_name, corners) => {
    const boundary: MultiPolygonXY = [[[...corners, corners[0]!]]];
    const rows = layRows(boundary, { originXY: corners[0]!, gridBearingDeg: lineBearing(0) }, { rowSpacingM: 2.5, vineSpacingM: 1.2, headlandM: 4 });
    const table = vineTable(rows);
    const vines = [...new Uint8Array(table.count).keys()];
    const gateXY = corners[0]!;
    const walks = trialWalks({ rows, table, vines, gateXY });
    for (const count of [12, 40, 70]) {
      const laid = [1, 2, 3, 4, 5].map((seed) => {
        const [draw] = drawTargets({ table, zoneOfVine: new Uint8Array(table.count).fill(1), wanted: [{ zone: 1, count }], seed });
        return walkBlock({ rows, vines: draw!.targets, gateXY }).walk.cost;
      });
      const mean = laid.reduce((sum, seconds) => sum + seconds, 0) / laid.length;
      expect(walkSeconds(walks, count, pace()) / mean).toBeGreaterThan(0.8);
      expect(walkSeconds(walks, count, pace()) / mean).toBeLessThan(1.2);
    }
  });
});
