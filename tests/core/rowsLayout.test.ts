import { describe, expect, it } from 'vitest';
import { AnalysisError } from '../../shared/analysis/analysisError.ts';
import type { MultiPolygonXY, XY } from '../../shared/geo/coordinates.ts';
import { lineBearing, type RowFrame } from '../../shared/geo/rowFrame.ts';
import { layRows, type PlantingFacts } from '../../shared/geo/rowsLayout.ts';
import { vineIndex, vineTable, vineXY } from '../../shared/geo/vines.ts';

// Expected rows, pieces, lengths and vines: shapely (line-polygon intersection) and an independent Python scan line, which agreed.

const ring = (...corners: XY[]): XY[] => [...corners, corners[0]!];
const shapes: Record<string, MultiPolygonXY> = {
  R: [[ring([0, 0], [100, 0], [100, 60], [0, 60])]],
  L: [[ring([0, 0], [120, 0], [120, 40], [50, 40], [50, 100], [0, 100])]],
  T: [[ring([0, 0], [150, 0], [30, 90])]],
  U: [[ring([0, 0], [120, 0], [120, 80], [80, 80], [80, 30], [40, 30], [40, 80], [0, 80])]],
  H: [[ring([0, 0], [100, 0], [100, 60], [0, 60]), ring([40, 20], [60, 20], [60, 40], [40, 40])]],
};

function lay(shape: string, bearingDeg: number, facts: PlantingFacts) {
  const boundary = shapes[shape]!;
  const frame: RowFrame = { originXY: boundary[0]![0]![0]!, gridBearingDeg: lineBearing(bearingDeg) };
  return layRows(boundary, frame, facts);
}

function totals({ rows }: ReturnType<typeof lay>) {
  const pieces = rows.flatMap((row) => row.pieces);
  return {
    rows: rows.length,
    pieces: pieces.length,
    lengthM: pieces.reduce((sum, piece) => sum + piece.lengthM, 0),
    vines: rows.reduce((sum, row) => sum + row.vineCount, 0),
  };
}

describe('row lines of an outline', () => {
  it.each([
    ['R', 0, 2.5, 1.5, 0, 5, 40, 40, 2400, 1600],
    ['R', 90, 2.5, 1.5, 0, 5, 24, 24, 2400, 1584],
    ['R', 30, 2.5, 1.5, 0, 5, 44, 44, 2390.525589, 1578],
    ['R', 210, 2.5, 1.5, 0, 5, 44, 44, 2390.525589, 1578],
    ['R', 30, 2.5, 1.5, 4, 5, 42, 42, 2033.504172, 1328],
    ['R', 0, 2.2, 1.2, 6, 5, 45, 45, 2160, 1800],
    ['L', 0, 2.5, 1.5, 0, 5, 48, 48, 3120, 2048],
    ['L', 90, 2.5, 1.5, 0, 5, 40, 40, 3120, 2072],
    ['L', 45, 2.5, 1.5, 0, 5, 60, 60, 3113.986284, 2050],
    ['L', 135, 2.4, 1.2, 3, 5, 43, 59, 2865.644148, 2368],
    ['T', 0, 3, 1.2, 0, 5, 47, 47, 2241, 1845],
    ['T', 0, 3, 1.2, 0, 20, 39, 39, 2140.875, 1765],
    ['T', 90, 3, 1.2, 0, 5, 29, 29, 2247.5, 1858],
    ['T', 60, 3, 1.2, 0, 5, 43, 43, 2241.503236, 1847],
    ['U', 90, 2.5, 1.5, 3, 5, 32, 52, 2728, 1792],
    ['U', 70, 2.2, 1.1, 3, 5, 50, 69, 3014.449474, 2716],
    ['H', 15, 2, 1, 2, 5, 54, 66, 2526.467774, 2504],
  ])('%s at %d°, rows %d m, vines %d m, set-back %d m, shortest %d m', (shape, bearing, d, v, h, shortest, rows, pieces, lengthM, vines) => {
    const found = totals(lay(shape, bearing, { rowSpacingM: d, vineSpacingM: v, headlandM: h, shortestRowM: shortest }));
    expect(found).toEqual({ rows, pieces, lengthM: expect.closeTo(lengthM, 5), vines });
    expect(Math.abs(found.lengthM - lengthM)).toBeLessThan(2e-6);
  });

  it('set back square to an oblique headland, the rows are those of the inset outline', () => {
    const found = totals(lay('R', 30, { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM: 4, headlandKind: 'square' }));
    expect(found).toEqual({ rows: 40, pieces: 40, lengthM: expect.closeTo(1906.570017, 5), vines: 1262 });
  });

  it.each([
    ['centred', 1.7, 98.3],
    ['left', 1.15, 97.75],
    ['right', 2.25, 98.85],
  ] as const)('43 rows of 2.3 m over 100 m, %s, run from %d to %d', (align, first, last) => {
    const { rows } = lay('R', 0, { rowSpacingM: 2.3, vineSpacingM: 1.5, headlandM: 0, align });
    expect(rows).toHaveLength(43);
    expect(rows[0]!.s).toBeCloseTo(first, 9);
    expect(rows[42]!.s).toBeCloseTo(last, 9);
  });

  it('the first of 45 rows of 2.2 m over 100 m lies at 1.6 m', () => {
    expect(lay('R', 0, { rowSpacingM: 2.2, vineSpacingM: 1.2, headlandM: 6 }).rows[0]!.s).toBeCloseTo(1.6, 9);
  });

  it('an outline too narrow for one row gives no row and says so', () => {
    const narrow = layRows([[ring([0, 0], [2, 0], [2, 60], [0, 60])]], { originXY: [0, 0], gridBearingDeg: 0 }, { rowSpacingM: 2.5, vineSpacingM: 1, headlandM: 0 });
    expect(narrow.rows).toEqual([]);
    expect(narrow.warnings).toEqual([{ code: 'noRows' }]);
  });

  it('two parts of a block share one set of lines', () => {
    const twoParts: MultiPolygonXY = [shapes['R']![0]!, [ring([0, 80], [100, 80], [100, 100], [0, 100])]];
    const { rows } = layRows(twoParts, { originXY: [0, 0], gridBearingDeg: 0 }, { rowSpacingM: 2.5, vineSpacingM: 1, headlandM: 0 });
    expect(rows).toHaveLength(40);
    expect(rows.every((row) => row.pieces.length === 2 && row.vineCount === 80)).toBe(true);
    expect(rows[0]!.pieces[1]!.firstVine).toBe(61);
  });
});

describe('numbers counted in the field', () => {
  it('a counted number of rows is kept, spread evenly, and a spacing off by more than 5 % is reported', () => {
    const built = lay('R', 0, { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM: 0, rowCount: 36 });
    expect(built.rows).toHaveLength(36);
    const gaps = built.rows.slice(1).map((row, i) => row.s - built.rows[i]!.s);
    for (const gap of gaps) expect(gap).toBeCloseTo(100 / 36, 9);
    expect(built.warnings).toEqual([{ code: 'rowSpacingImplied', typedM: 2.5, impliedM: expect.closeTo(100 / 36, 9) }]);
  });

  it('a counted number near the typed spacing gives no warning', () => {
    expect(lay('R', 0, { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM: 0, rowCount: 41 }).warnings).toEqual([]);
  });

  it('in a triangle the count is met although corner lines are too short for a row', () => {
    expect(lay('T', 0, { rowSpacingM: 3, vineSpacingM: 1.2, headlandM: 0, rowCount: 46 }).rows).toHaveLength(46);
  });

  it('a counted number of vines is shared over the pieces by length and spread evenly', () => {
    const built = lay('U', 90, { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM: 3, vineCounts: [{ row: 1, vineCount: 50 }] });
    const row = built.rows[0]!;
    expect(row.vineCount).toBe(50);
    expect(row.pieces.map((piece) => piece.vineCount)).toEqual([25, 25]);
    expect(row.pieces[0]!.stepM).toBeCloseTo(34 / 25, 9);
    expect(built.warnings).toEqual([{ code: 'vineSpacingImplied', row: 1, typedM: 1.5, impliedM: expect.closeTo(68 / 50, 9) }]);
  });

  it.each([
    [{ rowSpacingM: 0 }, /Row spacing is 0 m/],
    [{ rowSpacingM: Number.NaN }, /Row spacing is NaN m/],
    [{ vineSpacingM: -1 }, /Vine spacing is -1 m/],
    [{ headlandM: -2 }, /Headland is -2 m/],
    [{ rowCount: 2.5 }, /whole number/],
    [{ rowSpacingM: 0.001 }, /check its unit/],
  ])('facts that cannot be used are refused: %o', (fact, message) => {
    const facts = { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM: 0, ...fact };
    expect(() => lay('R', 0, facts)).toThrow(AnalysisError);
    expect(() => lay('R', 0, facts)).toThrow(message);
  });
});

describe('vines of a row', () => {
  it.each([
    ['centred', 0.75, 0.75],
    ['fromStart', 0.5, 1],
    ['fromEnd', 1, 0.5],
  ] as const)('%s vines leave %d m at the start and %d m at the end of 60 m', (vineAlign, atStart, atEnd) => {
    const piece = lay('R', 0, { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM: 0, endOffsetM: 0.5, vineAlign }).rows[0]!.pieces[0]!;
    expect(piece.vineCount).toBe(40);
    expect(piece.firstVineM).toBeCloseTo(atStart, 9);
    expect(piece.lengthM - piece.firstVineM - 39 * piece.stepM).toBeCloseTo(atEnd, 9);
  });

  it('the table and the single look-up place every vine alike, inside the outline, in order of row and ordinal', () => {
    const built = lay('H', 15, { rowSpacingM: 2, vineSpacingM: 1, headlandM: 2 });
    const table = vineTable(built);
    expect(table.count).toBe(2504);
    for (let vine = 0; vine < table.count; vine++) {
      const row = built.rows[table.row[vine]!]!;
      expect(vineIndex(table, table.row[vine]!, table.ordinal[vine]!)).toBe(vine);
      expect(vineXY(row, table.ordinal[vine]!)).toEqual([table.x[vine], table.y[vine]]);
      const inHole = table.x[vine]! > 40 && table.x[vine]! < 60 && table.y[vine]! > 20 && table.y[vine]! < 40;
      expect(table.x[vine]! > 0 && table.x[vine]! < 100 && table.y[vine]! > 0 && table.y[vine]! < 60 && !inHole).toBe(true);
    }
    expect(table.pieceStart).toHaveLength(67);
    expect(vineIndex(table, 0, 0)).toBe(-1);
    expect(vineIndex(table, 3, built.rows[3]!.vineCount + 1)).toBe(-1);
    expect(vineXY(built.rows[3]!, 0)).toBeNull();
  });

  it('vine numbers run on over a notch', () => {
    const row = lay('U', 90, { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM: 3 }).rows[3]!;
    expect(row.pieces.map((piece) => [piece.firstVine, piece.vineCount])).toEqual([[1, 22], [23, 22]]);
    expect(vineXY(row, 22)![0]).toBeCloseTo(35.75, 9);
    expect(vineXY(row, 23)![0]).toBeCloseTo(84.25, 9);
  });
});
