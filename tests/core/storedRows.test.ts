import { describe, expect, it } from 'vitest';
import { buildRows } from '../../shared/geo/rows.ts';
import { rowsFromStored, storedPieces } from '../../shared/geo/storedRows.ts';
import { vineTable } from '../../shared/geo/vines.ts';

/** A notched block in the north and one in the south, so that pieces, holes and both hemispheres occur. */
const cases = [
  { name: 'north', epsg: 32630, rowBearingDeg: 27, headlandM: 5, boundary: [[[[-1.8012, 42.5101], [-1.7985, 42.5104], [-1.7981, 42.5083], [-1.8009, 42.508], [-1.8012, 42.5101]]]] },
  { name: 'south', epsg: 32754, rowBearingDeg: 102, headlandM: 6, boundary: [[[[138.9903, -34.5302], [138.9941, -34.5306], [138.9936, -34.5329], [138.9918, -34.5318], [138.9899, -34.5325], [138.9903, -34.5302]]]] },
] as const;

describe('stored rows', () => {
  it.each(cases)('$name: vines stand within a millimetre of where they were built', ({ epsg, rowBearingDeg, headlandM, boundary }) => {
    const built = buildRows(boundary, { epsg, bearingDeg: rowBearingDeg, bearingKind: 'true', rowSpacingM: 2.8, vineSpacingM: 1.2, headlandM });
    const stored = built.rows.map((row) => ({ ordinal: row.ordinal, vineCount: row.vineCount, pieces: storedPieces(row, epsg) }));
    const read = rowsFromStored({ boundary, rowBearingDeg, epsg }, JSON.parse(JSON.stringify(stored)));
    expect(read.frame.gridBearingDeg).toBeCloseTo(built.frame.gridBearingDeg, 9);
    const [before, after] = [vineTable(built), vineTable(read)];
    expect(after.count).toBe(before.count);
    expect(after.ordinal).toEqual(before.ordinal);
    let farthestM = 0;
    for (let vine = 0; vine < before.count; vine++) farthestM = Math.max(farthestM, Math.hypot(after.x[vine]! - before.x[vine]!, after.y[vine]! - before.y[vine]!));
    expect(before.count).toBeGreaterThan(5000);
    expect(farthestM).toBeLessThan(0.001);
    read.rows.forEach((row, at) => expect(row.s).toBeCloseTo(built.rows[at]!.s, 3));
  });
});
