import { describe, expect, it } from 'vitest';
import { seededRandom } from '../../shared/analysis/random.ts';
import type { MultiPolygonXY, XY } from '../../shared/geo/coordinates.ts';
import { lineBearing, toAlongAcross } from '../../shared/geo/rowFrame.ts';
import { layRows, type RowsXY } from '../../shared/geo/rowsLayout.ts';
import { vineTable, vineXY } from '../../shared/geo/vines.ts';
import { drawTargets } from '../../shared/sampling/targets.ts';
import { alleysOfRows } from '../../shared/sampling/walkAlleys.ts';
import { shareBlockWalk, sheetOfBlock, walkBlock } from '../../shared/sampling/walkBlock.ts';
import { placeOfGate } from '../../shared/sampling/walkPlaces.ts';

const ring = (...corners: XY[]): MultiPolygonXY => [[[...corners, corners[0]!]]];
const lay = (boundary: MultiPolygonXY, bearing: number, headlandM = 4): RowsXY =>
  layRows(boundary, { originXY: boundary[0]![0]![0]!, gridBearingDeg: lineBearing(bearing) }, { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM });
const rectangle = ring([0, 0], [100, 0], [100, 60], [0, 60]);
const notched = ring([0, 0], [120, 0], [120, 80], [80, 80], [80, 30], [40, 30], [40, 80], [0, 80]);
const level = { pace: [{ belowPercent: Infinity, speedMS: 1 }] };

/** Signed side of a point against the line from `a` to `b`. */
const side = (a: XY, b: XY, p: XY): number => (b[0] - a[0]) * (p[1] - a[1]) - (b[1] - a[1]) * (p[0] - a[0]);

/** Whether a leg of a path cuts through a row's wires strictly inside its ends. */
function cutsRow(path: readonly XY[], rows: RowsXY): boolean {
  return path.slice(1).some((to, i) => rows.rows.some((row) => row.pieces.some(({ fromXY, toXY }) => {
    const from = path[i]!;
    const crosses = side(fromXY, toXY, from) * side(fromXY, toXY, to) < -1e-9;
    const within = side(from, to, fromXY) * side(from, to, toXY) < -1e-6;
    if (!crosses || !within) return false;
    // going round a row's end is stepping over its end post at most
    const share = side(fromXY, toXY, from) / (side(fromXY, toXY, from) - side(fromXY, toXY, to));
    const at: XY = [from[0] + share * (to[0] - from[0]), from[1] + share * (to[1] - from[1])];
    const fromEnd = Math.min(Math.hypot(at[0] - fromXY[0], at[1] - fromXY[1]), Math.hypot(at[0] - toXY[0], at[1] - toXY[1]));
    return fromEnd > 3;
  })));
}

describe('alleys of a block', () => {
  it('N rows have N + 1 alleys, half-way between them, as long as the longer neighbour', () => {
    const rows = lay(ring([0, 0], [150, 0], [30, 90]), 0);
    const { layout, assumedOpen } = alleysOfRows(rows);
    expect(layout.alleys).toHaveLength(rows.rows.length + 1);
    expect(assumedOpen).toBe(false);
    const t = (xy: XY) => toAlongAcross(rows.frame, xy).t;
    for (let j = 1; j < rows.rows.length; j++) {
      const [low, high] = [rows.rows[j - 1]!, rows.rows[j]!];
      expect(layout.alleys[j]!.s).toBeCloseTo((low.s + high.s) / 2, 9);
      expect(layout.alleys[j]!.topT).toBeCloseTo(Math.max(t(low.pieces[0]!.toXY), t(high.pieces[0]!.toXY)), 9);
    }
    const rise = layout.alleys[11]!.topT - layout.alleys[10]!.topT;
    expect(layout.topM[10]).toBeCloseTo(Math.hypot(2.5, rise), 9);
  });

  it('a notch breaks the alleys inside it and its row ends are ways through', () => {
    const rows = lay(notched, 90, 3);
    const { layout } = alleysOfRows(rows);
    const interrupted = rows.rows.filter((row) => row.pieces.length === 2).length;
    expect(interrupted).toBe(20);
    expect(layout.gaps).toHaveLength(40);
    expect(layout.alleys.filter((alley) => (alley.breaks ?? []).length === 1)).toHaveLength(20);
    expect(layout.alleys[5]!.breaks![0]![1] - layout.alleys[5]!.breaks![0]![0]).toBeCloseTo(46, 9);
  });

  it('two parts that do not touch are joined over the ground between them, and this is said', () => {
    const apart: MultiPolygonXY = [rectangle[0]!, [[[0, 80], [100, 80], [100, 140], [0, 140], [0, 80]]]];
    expect(alleysOfRows(lay(apart, 0)).assumedOpen).toBe(true);
  });
});

describe('a walk in a block', () => {
  const rows = lay(rectangle, 0);

  it('one vine in row 11: up one of its alleys and back, from the gate at the corner', () => {
    const row = rows.rows[10]!;
    const vine = vineXY(row, 20)!;
    const { walk, pathXY } = walkBlock({ rows, vines: [{ rowIndex: 10, ordinal: 20 }], gateXY: [0, 4], ground: level });
    // from the gate to the alley on the near side of the row (s = row - 1.25), along it, and back
    expect(walk.lengthM).toBeCloseTo(2 * (row.s - 1.25 + (vine[1] - 4)), 9);
    expect(walk.stops[0]!.alley).toBe(10);
    expect(pathXY[0]).toEqual([expect.closeTo(0, 9), expect.closeTo(4, 9)]);
    expect(pathXY.at(-1)).toEqual(pathXY[0]);
    const far = walkBlock({ rows, vines: [{ rowIndex: 10, ordinal: 20, side: 'high' }], gateXY: [0, 4], ground: level });
    expect(far.walk.lengthM).toBeCloseTo(walk.lengthM + 5, 9);
  });

  it('a start among the rows lies in its alley, and the way out of it crosses no row', () => {
    const rows = lay(rectangle, 0);
    const { layout } = alleysOfRows(rows);
    expect(placeOfGate(layout, rows.frame, [50.4, 31])).toMatchObject({ at: 'alley', alley: 20, t: expect.closeTo(31, 9), spur: { lengthM: expect.closeTo(0.4, 9) } });
    const { pathXY } = walkBlock({ rows, vines: [{ rowIndex: 2, ordinal: 5 }, { rowIndex: 30, ordinal: 9 }], gateXY: [50.4, 31], ground: level });
    expect(cutsRow(pathXY, rows)).toBe(false);
    // In the mouth of a notch one stands on open ground: the walk goes on at the nearer row ends.
    const open = lay(notched, 90, 3);
    const { layout: mouth } = alleysOfRows(open);
    expect(placeOfGate(mouth, open.frame, [45, 60])).toMatchObject({ at: 'alley', spur: { lengthM: expect.closeTo(8, 0) } });
  });

  it('a gate off the headland, beside the block or on it is joined at the nearest point', () => {
    const { layout } = alleysOfRows(rows);
    expect(placeOfGate(layout, rows.frame, [30, 4])).toEqual({ at: 'end', alley: 12, end: 'bottom' });
    expect(placeOfGate(layout, rows.frame, [30.5, 4])).toMatchObject({ at: 'headland', alley: 12, end: 'bottom', share: expect.closeTo(0.2, 9) });
    expect(placeOfGate(layout, rows.frame, [30, -6])).toMatchObject({ at: 'end', alley: 12, spur: { lengthM: 10 } });
    expect(placeOfGate(layout, rows.frame, [107, 30])).toMatchObject({ at: 'alley', alley: 40, t: expect.closeTo(30, 9), spur: { lengthM: expect.closeTo(7, 9) } });
  });

  it('a listed gap at a missing vine shortens the walk; a shut row end lengthens it; a shut alley is not entered', () => {
    const vines = [{ rowIndex: 9, ordinal: 18 }, { rowIndex: 11, ordinal: 18 }];
    const plain = walkBlock({ rows, vines, gateXY: [25, 4], ground: level });
    const gapped = walkBlock({ rows, vines, gateXY: [25, 4], ground: level, alleys: { gaps: [{ rowIndex: 10, ordinal: 17 }] } });
    expect(gapped.walk.lengthM).toBeLessThan(plain.walk.lengthM);
    const shut = walkBlock({ rows, vines, gateXY: [20, 4], ground: level, alleys: { shutEnds: [{ rowIndex: 9, end: 'start' }, { rowIndex: 10, end: 'start' }] } });
    expect(shut.walk.lengthM).toBeGreaterThan(walkBlock({ rows, vines, gateXY: [20, 4], ground: level }).walk.lengthM);
    const kept = walkBlock({ rows, vines, gateXY: [25, 4], ground: level, alleys: { shutAlleys: [10, 11] } });
    expect(kept.walk.stops.map(({ alley }) => alley).sort((a, b) => a - b)).toEqual([9, 12]);
    expect(kept.walk.steps.some(({ kind, from }) => kind === 'alley' && (from.alley === 10 || from.alley === 11))).toBe(false);
  });

  it('its sheet counts the vines ahead from the end of the row where one goes in', () => {
    // rows run from y = 4 to 56 with 34 vines 1.5 m apart, the first at 5.25
    const vines = [{ rowIndex: 10, ordinal: 20 }, { rowIndex: 10, ordinal: 9 }, { rowIndex: 30, ordinal: 2 }, { rowIndex: 30, ordinal: 33 }];
    const lines = sheetOfBlock({ rows, vines }, walkBlock({ rows, vines, gateXY: [0, 4], ground: level }), (vine) => (vine < 2 ? 1 : 2));
    const count = rows.rows[10]!.vineCount;
    expect(count).toBe(34);
    for (const { enterBy, ordinal, ahead, aheadFrom } of lines.filter((line) => line.aheadFrom === 'entry')) {
      expect([enterBy, ahead, aheadFrom]).toEqual([enterBy, enterBy === 'start' ? ordinal : count + 1 - ordinal, 'entry']);
    }
    expect(lines.some((line) => line.aheadFrom === 'lastVine' && line.ahead === 11)).toBe(true);
    expect(lines.filter(({ opensZone }) => opensZone)).toHaveLength(2);
  });

  it('a block without rows is told to build them', () => {
    expect(() => walkBlock({ rows: { ...rows, rows: [] }, vines: [], gateXY: [0, 0] })).toThrow(/build its rows/);
  });

  it('surveyed rows that bend are walked as well', () => {
    const bent = { ...rows, rows: rows.rows.map((row) => ({ ...row, pieces: row.pieces.map((piece) => ({ ...piece, bendsXY: [[piece.fromXY[0] + 1, 30] as XY] })) })) };
    const { walk } = walkBlock({ rows: bent, vines: [{ rowIndex: 4, ordinal: 30 }], gateXY: [0, 4], ground: level });
    expect(walk.stops).toHaveLength(1);
    expect(walk.lengthM).toBeGreaterThan(0);
  });

  it('unknown vines and vines between shut alleys are named', () => {
    expect(() => walkBlock({ rows, vines: [{ rowIndex: 3, ordinal: 99 }], gateXY: [0, 0] })).toThrow(/no vine 99 in row 4/);
    expect(() => walkBlock({ rows, vines: [{ rowIndex: 3, ordinal: 9 }], gateXY: [0, 0], alleys: { shutAlleys: [3, 4] } })).toThrow(/between shut alleys/);
  });

  it('on a slope the walk takes the time of the slope, and may go round a steep part', () => {
    const vines = [{ rowIndex: 2, ordinal: 30 }, { rowIndex: 30, ordinal: 30 }];
    const steep = { elevationM: ([x, y]: XY) => (y < 30 && x > 20 ? 0.5 * y : 15) };
    const flat = walkBlock({ rows, vines, gateXY: [0, 4] });
    const slow = walkBlock({ rows, vines, gateXY: [0, 4], ground: steep });
    expect(flat.walk.cost).toBeCloseTo(flat.walk.lengthM / 0.836, 6);
    expect(slow.walk.lengthM).toBeGreaterThanOrEqual(flat.walk.lengthM);
    expect(slow.walk.cost).toBeGreaterThan(flat.walk.cost);
  });

  it('whoever takes over on the spot keeps the rest of the walk', () => {
    const random = seededRandom(6);
    const vines = Array.from({ length: 15 }, () => ({ rowIndex: 1 + Math.floor(random() * 38), ordinal: 3 + Math.floor(random() * 28) }));
    const { walk } = walkBlock({ rows, vines, gateXY: [0, 4], ground: level });
    const done = walk.stops.slice(0, 6);
    const last = done.at(-1)!;
    const left = vines.filter((_, i) => !done.some(({ target }) => target === i));
    const rest = walkBlock({ rows, vines: left, gateXY: [0, 4], ground: level, from: { ...vines[last.target]!, alley: last.alley } });
    expect(rest.walk.lengthM).toBeCloseTo(walk.lengthM - last.distanceM, 6);
  });
});

describe('drawn targets in awkward blocks', () => {
  const blocks: [string, MultiPolygonXY, number][] = [
    ['rectangle', rectangle, 0], ['oblique rows', rectangle, 30], ['notched', notched, 90], ['notched, oblique', notched, 70],
    ['with a hole', [[...rectangle[0]!, [[40, 20], [60, 20], [60, 40], [40, 40], [40, 20]]]], 15],
    ['triangle', ring([0, 0], [150, 0], [30, 90]), 60],
  ];

  it.each(blocks)('%s: every target is reached, every step is along an alley or round row ends, and no leg cuts a row', (_, boundary, bearing) => {
    const rows = lay(boundary, bearing, 2);
    const table = vineTable(rows);
    for (let seed = 1; seed <= 5; seed++) {
      const { targets } = drawTargets({ table, zoneOfVine: new Uint8Array(table.count).fill(1), wanted: [{ zone: 1, count: 20 }], seed })[0]!;
      const { walk, pathXY, layout } = walkBlock({ rows, vines: targets, gateXY: [-5, -5], end: seed % 2 === 0 ? 'anywhere' : 'gate', ground: level });
      expect(new Set(walk.stops.map(({ target }) => target)).size).toBe(20);
      for (const { from, to, kind, lengthM } of walk.steps) {
        if (kind !== 'alley') continue;
        const alley = layout.alleys[from.alley]!;
        expect(from.alley).toBe(to.alley);
        expect(Math.abs(to.t - from.t)).toBeCloseTo(lengthM, 9);
        expect((alley.breaks ?? []).some(([low, high]) => Math.min(from.t, to.t) < high && Math.max(from.t, to.t) > low)).toBe(false);
      }
      for (const stop of walk.stops) {
        const { rowIndex } = targets[stop.target]!;
        expect([rowIndex, rowIndex + 1]).toContain(stop.alley);
      }
      // legs on the headland pass the end posts; nothing goes through a row further in
      expect(cutsRow(pathXY.slice(1, -1), rows)).toBe(false);
    }
  });
});

describe('a team in a block', () => {
  it('shares 40 vines among three evenly, each vine once, all from the gate', () => {
    const rows = lay(rectangle, 30, 2);
    const table = vineTable(rows);
    const { targets } = drawTargets({ table, zoneOfVine: new Uint8Array(table.count).fill(1), wanted: [{ zone: 1, count: 40 }], seed: 2 })[0]!;
    const shared = shareBlockWalk({ rows, vines: targets, gateXY: [0, 0] }, { people: 3, serviceSOf: () => 60 });
    expect(shared.isEven).toBe(true);
    expect(Math.max(...shared.loads) / Math.min(...shared.loads)).toBeLessThanOrEqual(1.15);
    expect(shared.walks.flatMap(({ walk }) => walk.stops.map(({ target }) => target)).sort((a, b) => a - b)).toEqual([...targets.keys()]);
    shared.walks.forEach(({ walk }, person) => expect(walk.cost + 60 * walk.stops.length).toBeCloseTo(shared.loads[person]!, 6));
  });
});
