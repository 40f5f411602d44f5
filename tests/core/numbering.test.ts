import { describe, expect, it } from 'vitest';
import type { MultiPolygonXY, XY } from '../../shared/geo/coordinates.ts';
import { keepOrdinals, matchRows } from '../../shared/geo/matchRows.ts';
import { numberingFromTap, renumberRows, rowLabels, vineLabel, vineOrdinal } from '../../shared/geo/numbering.ts';
import { lineBearing } from '../../shared/geo/rowFrame.ts';
import { layRows, type PlantingFacts } from '../../shared/geo/rowsLayout.ts';
import { vineXY } from '../../shared/geo/vines.ts';

const ring = (...corners: XY[]): MultiPolygonXY => [[[...corners, corners[0]!]]];
const rectangle = (width: number, height = 60): MultiPolygonXY => ring([0, 0], [width, 0], [width, height], [0, height]);
const notched = ring([0, 0], [120, 0], [120, 80], [80, 80], [80, 30], [40, 30], [40, 80], [0, 80]);
const facts: PlantingFacts = { rowSpacingM: 2.5, vineSpacingM: 1.5, headlandM: 0 };
const lay = (boundary: MultiPolygonXY, bearing: number, more: Partial<PlantingFacts> = {}) =>
  layRows(boundary, { originXY: [0, 0], gridBearingDeg: lineBearing(bearing) }, { ...facts, ...more });

// Expected positions: the Python prototype of the row rules (numpy, shapely).
describe('the numbering corner', () => {
  it.each([
    ['R 90', rectangle(100), 90, 0, [0, 60], 'low', 'start', [1.25, 58.75], [10.25, 48.75]],
    ['R 90', rectangle(100), 90, 0, [0, 0], 'high', 'start', [1.25, 1.25], [10.25, 11.25]],
    ['R 90', rectangle(100), 90, 0, [100, 0], 'high', 'end', [98.75, 1.25], [89.75, 11.25]],
    ['R 30', rectangle(100), 30, 0, [0, 0], 'low', 'start', [0.3777, 51.5516], [5.0262, 39.6031]],
    ['R 210', rectangle(100), 210, 0, [0, 0], 'low', 'start', [0.3777, 51.5516], [5.0262, 39.6031]],
    ['R 30', rectangle(100), 30, 0, [100, 60], 'high', 'end', [99.6223, 8.4484], [94.9738, 20.3969]],
    ['U 90', notched, 90, 3, [0, 80], 'low', 'start', [4.25, 78.75], [13.25, 68.75]],
  ] as const)('%s tapped at its corner', (_, boundary, bearing, headlandM, tap, side, end, rowOneVineOne, rowFiveVineSeven) => {
    const built = lay(boundary, bearing, { headlandM });
    const corner = numberingFromTap(built, tap)!;
    expect(corner).toEqual({ rowOneSide: side, vineOneEnd: end });
    const labels = rowLabels(built.rows.length, corner.rowOneSide);
    const at = (rowNumber: number, vineNumber: number) => {
      const row = built.rows[labels.indexOf(rowNumber)]!;
      return vineXY(row, vineOrdinal(row, vineNumber, corner.vineOneEnd)!)!;
    };
    for (const axis of [0, 1] as const) {
      expect(at(1, 1)[axis]).toBeCloseTo(rowOneVineOne[axis], 3);
      expect(at(5, 7)[axis]).toBeCloseTo(rowFiveVineSeven[axis], 3);
    }
  });

  it('vine counts of the numbered rows', () => {
    const rows = lay(rectangle(100), 30).rows;
    expect([rows[0]!.vineCount, rows[4]!.vineCount]).toEqual([7, 22]);
    expect(lay(notched, 90, { headlandM: 3 }).rows[0]!.vineCount).toBe(44);
  });

  it('a label and its ordinal are inverse, and a number beyond the row is none', () => {
    const row = lay(rectangle(100), 90).rows[0]!;
    for (const end of ['start', 'end'] as const) {
      for (const label of [1, 2, 30, row.vineCount]) expect(vineLabel(row, vineOrdinal(row, label, end)!, end)).toBe(label);
      for (const label of [0, row.vineCount + 1, 1.5]) expect(vineOrdinal(row, label, end)).toBeNull();
    }
    expect(vineLabel(row, 1, 'end')).toBe(row.vineCount);
  });

  it('a block without rows has no corner', () => {
    expect(numberingFromTap({ frame: { originXY: [0, 0], gridBearingDeg: 0 }, rows: [] }, [0, 0])).toBeNull();
  });
});

describe('renumbering', () => {
  it('moving row 1 to the other side writes labels only: row 11 of 24 becomes 14 (was 11)', () => {
    const rows = rowLabels(24, 'low').map((label) => ({ rowId: `id ${label}`, label: String(label) }));
    const changed = renumberRows(rows, 'high');
    expect(changed[10]).toEqual({ rowId: 'id 11', label: '14', was: '11' });
    expect(changed.map(({ rowId }) => rowId)).toEqual(rows.map(({ rowId }) => rowId));
    expect(renumberRows(changed, 'high').every(({ was }) => was === null)).toBe(true);
    expect(renumberRows(changed, 'low').map(({ label }) => label)).toEqual(rows.map(({ label }) => label));
  });
});

describe('rebuilt rows keep their identities', () => {
  const known = lay(rectangle(100), 0).rows.map((row) => ({ rowId: `old ${row.ordinal}`, row }));
  const spacing = { rowSpacingM: 2.5, vineSpacingM: 1.5 };

  it.each([
    [101, 40, 1.75],
    [102, 40, 2.25],
    [102.4, 40, 2.45],
    [102.5, 41, 1.25],
    [105, 42, 1.25],
  ])('an outline widened from 100 to %d m has %d rows and keeps all 40 old ones', (width, rowCount, firstS) => {
    const rebuilt = lay(rectangle(width), 0);
    expect(rebuilt.rows).toHaveLength(rowCount);
    expect(rebuilt.rows[0]!.s).toBeCloseTo(firstS, 9);
    const found = matchRows(known, rebuilt, spacing);
    expect(found.matches.map(({ rowId, rowIndex }) => [rowId, rowIndex])).toEqual(known.map(({ rowId }, i) => [rowId, i]));
    expect(found.goneRowIds).toEqual([]);
    expect(found.newRows).toHaveLength(rowCount - 40);
    expect(found.matches.every(({ oldOrdinals }) => oldOrdinals.every((old, i) => old === i + 1))).toBe(true);
  });

  it('a row lengthened at its start end keeps the ordinals of its vines and gets lower ones for the new vines', () => {
    const longer = lay(ring([0, -6], [100, -6], [100, 60], [0, 60]), 0);
    const found = matchRows(known, longer, spacing);
    const { row, moved } = keepOrdinals(longer.rows[7]!, found.matches[7]!.oldOrdinals);
    expect(found.matches[7]!.oldOrdinals.slice(0, 6)).toEqual([null, null, null, null, 1, 2]);
    expect(moved).toEqual([]);
    expect(row.pieces[0]!.firstVine).toBe(-3);
    expect(vineXY(row, 1)).toEqual(vineXY(known[7]!.row, 1)!.map((value) => expect.closeTo(value, 9)));
    expect(vineLabel(row, 1, 'start')).toBe(5);
    expect(vineOrdinal(row, 5, 'start')).toBe(1);
  });

  it('vines that a new spacing cannot keep are listed', () => {
    const respaced = lay(rectangle(100), 0, { vineSpacingM: 1.45 });
    const found = matchRows(known, respaced, spacing);
    expect(respaced.rows[0]!.vineCount).toBe(41);
    const { moved } = keepOrdinals(respaced.rows[0]!, found.matches[0]!.oldOrdinals);
    expect(moved.length).toBeGreaterThan(0);
  });

  it('half of the block given up: its rows are gone, the others keep their ids', () => {
    const found = matchRows(known, lay(rectangle(50), 0), spacing);
    expect(found.matches).toHaveLength(20);
    expect(found.goneRowIds).toEqual(known.slice(20).map(({ rowId }) => rowId));
  });

  it('a row beyond the headland of an old one is another row', () => {
    const beyond = layRows(ring([0, 80], [100, 80], [100, 140], [0, 140]), { originXY: [0, 0], gridBearingDeg: 0 }, facts);
    const found = matchRows(known, beyond, spacing);
    expect(found.matches).toEqual([]);
    expect(found.newRows).toHaveLength(40);
  });
});
