import { describe, expect, it } from 'vitest';
import { planChoices, type PlanChoicesInput } from '../../shared/contracts/planChoices.ts';
import type { WalkExpected } from '../../shared/contracts/planBasis.ts';
import type { MultiPolygonXY, XY } from '../../shared/geo/coordinates.ts';
import { lineBearing } from '../../shared/geo/rowFrame.ts';
import { layRows } from '../../shared/geo/rowsLayout.ts';
import { vineTable } from '../../shared/geo/vines.ts';
import { drawTargets } from '../../shared/sampling/targets.ts';
import { walkBlock } from '../../shared/sampling/walkBlock.ts';
import { shareBySlope, trialWalks, walksAsLaid, walkSeconds } from '../../shared/sampling/walkEstimate.ts';
import { USUAL_PACE } from '../../shared/sampling/walkTime.ts';

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

  it('weighs each class of slopes by its metres, and leaves walks alone whose metres nobody knows', () => {
    // 300 m level and 100 m at 10 %: at 0.836 and 0.694 m/s 503 s; with half the speed on the slope 300/0.836 + 100/0.418.
    const slopedS = 300 / 0.836 + 100 / 0.694;
    const walks: WalkExpected[] = [{ vines: 10, levelS: 400 / 0.836, slopedS, slopesM: [300, 100, 0, 0] }];
    const at = (facts: PlanChoicesInput['pace'], of = walks) => walkSeconds(of, 10, pace({ kmPerHour: 3.0096, ...facts }));
    expect(at({})).toBeCloseTo(slopedS, 9);
    expect(at({ slopeSpeeds: [0.5, 0.4, 0.3] })).toBeCloseTo(300 / 0.836 + 100 / 0.418, 6);
    expect(at({ slopeSpeeds: [1, 1, 1] })).toBeCloseTo(400 / 0.836, 6);
    expect(at({ slopeSpeeds: [0.5, 0.4, 0.3], onSlopes: false })).toBeCloseTo(400 / 0.836, 9);
    expect(at({ slopeSpeeds: [0.5, 0.4, 0.3] }, [level(10, 400)])).toBe(at({}, [level(10, 400)]));
    expect(shareBySlope(walks)).toEqual([0.75, 0.25, 0, 0]);
    expect(shareBySlope([level(10, 400)])).toBeNull();
  });

  it('knows what the walk past every vine takes at other speeds on slopes', () => {
    const rows = layRows([[[[0, 0], [40, 0], [40, 20], [0, 20], [0, 0]]]], { originXY: [0, 0], gridBearingDeg: lineBearing(0) }, { rowSpacingM: 2.5, vineSpacingM: 2, headlandM: 2 });
    const table = vineTable(rows);
    const vines = [...new Uint8Array(table.count).keys()];
    // Steeper and steeper to the east: every class is on the way.
    const elevationM = ([x]: XY) => (x * x) / 160;
    const own = pace({ kmPerHour: 3.0096, slopeSpeeds: [0.95, 0.7, 0.35] });
    const walks = trialWalks({ rows, table, vines, gateXY: [0, 0], elevationM });
    for (const share of shareBySlope(walks)!) expect(share).toBeGreaterThan(0.05);
    const all = vines.map((vine) => ({ rowIndex: table.row[vine]!, ordinal: table.ordinal[vine]! }));
    const { walk } = walkBlock({ rows, vines: all, gateXY: [0, 0], ground: { elevationM, pace: [0.836, 0.836 * 0.95, 0.836 * 0.7, 0.836 * 0.35].map((speedMS, i) => ({ ...USUAL_PACE[i]!, speedMS })) } });
    expect(walkSeconds(walks, vines.length, own) / walk.cost).toBeCloseTo(1, 2);
    expect(walkSeconds(walks, vines.length, pace({ kmPerHour: 3.0096 })) / walk.cost).toBeGreaterThan(1.1);
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
