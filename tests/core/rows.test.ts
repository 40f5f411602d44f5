import { describe, expect, it } from 'vitest';
import { AnalysisError } from '../../shared/analysis/analysisError.ts';
import type { LonLat, MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import { importRows, type RowLine } from '../../shared/geo/importedRows.ts';
import { buildRows } from '../../shared/geo/rows.ts';
import { fromUtm } from '../../shared/geo/utm.ts';
import { pointOnPiece, vineXY } from '../../shared/geo/vines.ts';

const closed = (...corners: LonLat[]): MultiPolygonLonLat => [[[...corners, corners[0]!]]];
const north = closed([-1.8012, 42.5101], [-1.7985, 42.5104], [-1.7981, 42.5083], [-1.8009, 42.508]);
const south = closed([138.9903, -34.5302], [138.9941, -34.5306], [138.9936, -34.5329], [138.9918, -34.5318], [138.9899, -34.5325]);
const northFacts = { bearingDeg: 27, bearingKind: 'true', rowSpacingM: 2.8, vineSpacingM: 1.2, headlandM: 5 } as const;
const southFacts = { bearingDeg: 102, bearingKind: 'true', rowSpacingM: 3, vineSpacingM: 1.8, headlandM: 6 } as const;

const sum = (values: number[]): number => values.reduce((total, value) => total + value, 0);
const totalM = (built: ReturnType<typeof buildRows>): number => sum(built.rows.flatMap((row) => row.pieces.map((piece) => piece.lengthM)));
const vines = (built: ReturnType<typeof buildRows>): number => sum(built.rows.map((row) => row.vineCount));

// Expected figures: Python with pyproj (PROJ) and shapely.
describe('rows from an outline in longitude and latitude', () => {
  it('a block in the north: zone, first vertex, convergence, rows and vines', () => {
    const built = buildRows(north, northFacts);
    expect(built.epsg).toBe(32630);
    expect(built.frame.originXY[0]).toBeCloseTo(598485.543, 3);
    expect(built.frame.originXY[1]).toBeCloseTo(4707110.823, 3);
    expect(built.frame.gridBearingDeg).toBeCloseTo(26.188865, 6);
    expect(built.rows).toHaveLength(109);
    expect(Math.abs(totalM(built) - 18041.382048)).toBeLessThan(1e-6);
    expect(vines(built)).toBe(14974);
  });

  it('read from grid north, the same number gives other rows', () => {
    expect(vines(buildRows(north, { ...northFacts, bearingKind: 'grid' }))).toBe(14979);
  });

  it('a block in the south, with a notch', () => {
    const built = buildRows(south, southFacts);
    expect(built.epsg).toBe(32754);
    expect(built.frame.gridBearingDeg).toBeCloseTo(102 - 1.138611, 6);
    expect(built.rows).toHaveLength(91);
    expect(built.rows.flatMap((row) => row.pieces)).toHaveLength(117);
    expect(Math.abs(totalM(built) - 22751.186007)).toBeLessThan(1e-6);
    expect(vines(built)).toBe(12581);
    expect(buildRows(south, { ...southFacts, bearingKind: 'grid' }).rows).toHaveLength(93);
  });

  it('a bearing typed the other way round gives the same rows', () => {
    expect(buildRows(north, { ...northFacts, bearingDeg: 207 }).rows).toHaveLength(109);
    expect(buildRows(north, { ...northFacts, bearingDeg: 207 }).frame.gridBearingDeg).toBeCloseTo(26.188865, 6);
  });

  it('an outline or a bearing that is missing is refused with its remedy', () => {
    expect(() => buildRows([], northFacts)).toThrow(/no outline/);
    expect(() => buildRows(north, { ...northFacts, bearingDeg: Number.NaN })).toThrow(/Row bearing is NaN/);
  });
});

describe('rows from surveyed lines', () => {
  const built = buildRows(south, southFacts);
  const asLines: RowLine[] = built.rows.flatMap((row) => row.pieces.map((piece) => ({ line: [piece.from, piece.to], label: `R${row.ordinal}` })));

  it('lines drawn in any order and direction give back the rows they came from', () => {
    const mixed = asLines.map(({ line, label }, i) => ({ label, line: i % 2 === 0 ? line : [...line].reverse() })).reverse();
    const imported = importRows(mixed, { vineSpacingM: 1.8, epsg: built.epsg });
    expect(imported.frame.gridBearingDeg).toBeCloseTo(built.frame.gridBearingDeg, 6);
    expect(imported.rowSpacingM).toBeCloseTo(3, 4);
    expect(imported.rows.map((row) => [row.pieces.length, row.vineCount])).toEqual(built.rows.map((row) => [row.pieces.length, row.vineCount]));
    expect(imported.importedLabels).toEqual(built.rows.map((row) => `R${row.ordinal}`));
    expect(imported.warnings).toEqual([]);
    const [x, y] = vineXY(imported.rows[40]!, 17)!;
    const [builtX, builtY] = vineXY(built.rows[40]!, 17)!;
    expect(Math.hypot(x - builtX, y - builtY)).toBeLessThan(1e-3);
  });

  it('a row cut where zones change, and rounded as files round, keeps every vine in its place', () => {
    const rounded = ([lon, lat]: LonLat): LonLat => [Math.round(lon * 1e8) / 1e8, Math.round(lat * 1e8) / 1e8];
    const cut = built.rows.flatMap((row) => row.pieces.flatMap((piece): RowLine[] => {
      const at = Array.from({ length: Math.max(1, Math.floor(piece.vineCount / 7)) }, (_, stretch) => piece.firstVineM + (7 * stretch - 0.5) * piece.stepM);
      const ends = [...at, piece.firstVineM + (piece.vineCount - 0.5) * piece.stepM].map((metres) => rounded(fromUtm(pointOnPiece(piece, metres), built.epsg)));
      return ends.slice(1).map((end, i) => ({ line: [ends[i]!, end], label: `R${row.ordinal}` }));
    }));
    expect(cut.length).toBeGreaterThan(1000);
    const imported = importRows(cut, { vineSpacingM: 1.8, epsg: built.epsg });
    expect(imported.rows.map((row) => row.vineCount)).toEqual(built.rows.map((row) => row.vineCount));
    const [x, y] = vineXY(imported.rows[40]!, 17)!;
    const [builtX, builtY] = vineXY(built.rows[40]!, 17)!;
    expect(Math.hypot(x - builtX, y - builtY)).toBeLessThan(0.01);
  });

  it('a missing row shows as an uneven gap', () => {
    const imported = importRows(asLines.filter(({ label }) => label !== 'R30'), { vineSpacingM: 1.8 });
    expect(imported.rows).toHaveLength(90);
    expect(imported.warnings).toEqual([{ code: 'unevenGap', row: 29, gapM: expect.closeTo(6, 4), usualM: expect.closeTo(3, 4) }]);
  });

  it('vines of a bending row are spaced along the bend', () => {
    const corner = (x: number, y: number): LonLat => fromUtm([598000 + x, 4707000 + y], 32630);
    const imported = importRows([{ line: [corner(0, 0), corner(0, 30), corner(9, 42)] }, { line: [corner(3, 0), corner(3, 42)] }], { vineSpacingM: 1, epsg: 32630, rowSpacingM: 3 });
    expect(imported.importedLabels).toEqual([null, null]);
    const bending = imported.rows.find((row) => row.pieces[0]!.bendsXY.length === 1)!;
    expect(bending.pieces[0]!.lengthM).toBeCloseTo(45, 3);
    expect(bending.vineCount).toBe(45);
    const [x, y] = vineXY(bending, 45)!;
    // 14.5 m past the bend on a 3-4-5 slope
    expect([x - 598000, y - 4707000]).toEqual([expect.closeTo(8.7, 3), expect.closeTo(41.6, 3)]);
  });

  it('a line without length is named', () => {
    expect(() => importRows([asLines[0]!, { line: [[1, 45], [1, 45]] }], { vineSpacingM: 1 })).toThrow(AnalysisError);
    expect(() => importRows([asLines[0]!, { line: [[1, 45], [1, 45]] }], { vineSpacingM: 1 })).toThrow(/Row line 2/);
    expect(() => importRows([], { vineSpacingM: 1 })).toThrow(/no row lines/);
  });
});
