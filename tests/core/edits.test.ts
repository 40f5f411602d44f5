import { describe, expect, it } from 'vitest';
import { applyEdit, replayEdits, zoneMapOf, type ZoneEdit, type ZoneMap } from '../../shared/analysis/edits.ts';
import { cellsOfGround } from '../../shared/analysis/editsGround.ts';
import { labelsFromRuns, runsFromLabels } from '../../shared/analysis/editsRuns.ts';
import { eachCellShare } from '../../shared/analysis/cellShares.ts';
import { gridOfOutline, toCellRing, type Grid } from '../../shared/analysis/grid.ts';
import { polygonise } from '../../shared/analysis/polygonise.ts';
import { randomIndex, seededRandom, type Random } from '../../shared/analysis/random.ts';
import type { LonLat } from '../../shared/geo/coordinates.ts';
import { polygonsArea } from '../../shared/geo/rings.ts';
import { fromUtm } from '../../shared/geo/utm.ts';
import { CORNER, picture, pictureGrid, rectangleGrid, shown } from './pictures.ts';

/** Position in metres east and south of the corner. */
const place = (east: number, south: number): LonLat => fromUtm([CORNER.x + east, CORNER.y - south], CORNER.epsg);
const line = (...points: readonly (readonly [number, number])[]) => points.map(([east, south]) => place(east, south));

interface Start {
  readonly grid: Grid;
  readonly map: ZoneMap;
}

function start(text: string): Start {
  const drawn = picture(text);
  const grid = pictureGrid(drawn);
  return { grid, map: zoneMapOf(grid, drawn.labels) };
}

const after = ({ grid, map }: Start, ...edits: ZoneEdit[]) => shown(replayEdits(grid, map, edits).labels, grid.cols);

describe('merging', () => {
  const block = start('1122 1133 .133');

  it('gives the ground of several zones to one, which keeps its number and name', () => {
    const named = applyEdit(block.grid, block.map, { kind: 'rename', zone: 2, name: 'Upper slope' });
    const merged = applyEdit(block.grid, named, { kind: 'merge', zones: [1, 2], into: 2 });
    expect(shown(merged.labels, 4)).toBe('2222 2233 .233');
    expect(merged.zones).toEqual([{ number: 2, name: 'Upper slope', colour: null }, { number: 3, name: null, colour: null }]);
  });

  it('needs a second zone, and zones that exist', () => {
    expect(() => applyEdit(block.grid, block.map, { kind: 'merge', zones: [1], into: 1 })).toThrow('Choose a second zone to merge with zone 1.');
    expect(() => applyEdit(block.grid, block.map, { kind: 'merge', zones: [1, 7], into: 1 })).toThrow('There is no zone 7; the zones are 1, 2, 3.');
  });
});

describe('splitting', () => {
  it('gives the smaller part the lowest free number', () => {
    const block = start('111111 111111 111111');
    expect(after(block, { kind: 'split', zone: 1, lineLonLat: line([2, -1], [2, 4]) })).toBe('221111 221111 221111');
    expect(after(block, { kind: 'split', zone: 1, lineLonLat: line([4, 5], [4, -2]), alongRow: '12' })).toBe('111122 111122 111122');
  });

  it('carries the line on at both ends, so it need not be drawn to the edge', () => {
    expect(after(start('111111 111111 111111'), { kind: 'split', zone: 1, lineLonLat: line([1, 1.2], [2, 1.2]) })).toBe('222222 111111 111111');
  });

  it('follows a bent line', () => {
    const bent = line([-1, 2], [3, 2], [3, 6]);
    expect(after(start('11111 11111 11111 11111 11111'), { kind: 'split', zone: 1, lineLonLat: bent })).toBe('11111 11111 22211 22211 22211');
  });

  it('cuts only the patch that was drawn across, and other zones not at all', () => {
    const block = start('11112 11112 22222 11112 11111');
    expect(after(block, { kind: 'split', zone: 1, lineLonLat: line([1, -0.5], [1, 2]) })).toBe('31112 31112 22222 11112 11111');
  });

  it('says when the line misses the zone or has no length', () => {
    const block = start('1122 1122');
    expect(() => applyEdit(block.grid, block.map, { kind: 'split', zone: 1, lineLonLat: line([3, 0], [3, 2]) })).toThrow('The line does not cut zone 1 in two; draw it across the zone.');
    expect(() => applyEdit(block.grid, block.map, { kind: 'split', zone: 1, lineLonLat: line([2, 0], [2, 2]) })).toThrow(/does not cut zone 1/);
    expect(() => applyEdit(block.grid, block.map, { kind: 'split', zone: 1, lineLonLat: line([2, 0], [2, 2]), alongRow: '7a' })).toThrow('All of zone 1 lies on one side of row 7a; choose a row with ground of the zone on both sides.');
    expect(() => applyEdit(block.grid, block.map, { kind: 'split', zone: 1, lineLonLat: line([1, 1], [1, 1]) })).toThrow('A line needs two different points; draw it across the zone.');
  });
});

describe('giving ground', () => {
  const block = start('1111 1122 .122');

  it('takes cells whose centre lies in a lasso, and only inside the block', () => {
    const lasso = line([-1, 1.4], [1.6, 1.4], [1.6, 9], [-1, 9], [-1, 1.4]);
    expect(after(block, { kind: 'give', toZone: 2, ground: { shape: 'polygons', polygonsLonLat: [[lasso]] } })).toBe('1111 2222 .222');
  });

  it('follows the even–odd rule where a lasso crosses itself', () => {
    const bow = line([0, 0], [4, 3], [4, 0], [0, 3], [0, 0]);
    const give = (ring: readonly LonLat[]): ZoneEdit => ({ kind: 'give', toZone: 5, ground: { shape: 'polygons', polygonsLonLat: [[ring]] } });
    expect(after(block, give(bow))).toBe('5115 5555 .125');
    const twiceAround = line([0, 0], [3, 0], [3, 3], [0, 3], [0, 0], [3, 0], [3, 3], [0, 3], [0, 0]);
    expect(() => after(block, give(twiceAround))).toThrow(/No ground of another zone/);
  });

  it('takes the strip along a row, cut square at its ends', () => {
    const rows = start('111111 111111 111111 111111');
    const strip = { lineLonLat: line([1, 2], [4, 2]), widthM: 2 };
    expect(after(rows, { kind: 'give', toZone: 2, ground: { shape: 'strips', strips: [strip] } })).toBe('111111 122211 122211 111111');
  });

  it('of neighbouring rows shares the ground out between them without gap or overlap', () => {
    const grid = rectangleGrid(40, 30, 2);
    const bearing = (27 * Math.PI) / 180;
    const strips = Array.from({ length: 60 }, (_, row) => {
      const across = (row - 30) * 2.4;
      const point = (along: number) => place(40 + across * Math.cos(bearing) + along * Math.sin(bearing), 30 + across * Math.sin(bearing) - along * Math.cos(bearing));
      return { lineLonLat: [point(-90), point(90)], widthM: 2.4 };
    });
    const claims = new Int32Array(1200);
    for (const strip of strips) for (const cell of cellsOfGround(grid, { shape: 'strips', strips: [strip] })) claims[cell]!++;
    expect(new Set(claims)).toEqual(new Set([1]));
  });

  it('takes single cells, for a new zone too, and drops a zone that has none left', () => {
    const given = applyEdit(block.grid, block.map, { kind: 'give', toZone: 4, ground: { shape: 'cells', cells: [6, 7, 10, 11, 8] } });
    expect(shown(given.labels, 4)).toBe('1111 1144 .144');
    expect(given.zones.map(({ number }) => number)).toEqual([1, 4]);
  });

  it('says when nothing would change, and when a cell or number cannot be', () => {
    const give = (toZone: number, cells: number[]): ZoneEdit => ({ kind: 'give', toZone, ground: { shape: 'cells', cells } });
    expect(() => applyEdit(block.grid, block.map, give(1, [0, 1]))).toThrow(/No ground of another zone lies there to give to zone 1/);
    expect(() => applyEdit(block.grid, block.map, give(1, [12]))).toThrow(/Cell 12 is not on this block's grid/);
    expect(() => applyEdit(block.grid, block.map, give(0, [0]))).toThrow('A zone cannot have the number 0; use a whole number from 1 to 60.');
    expect(() => applyEdit(block.grid, block.map, give(61, [0]))).toThrow(/cannot have the number 61/);
  });
});

describe('names, numbers and colours', () => {
  const block = start('1122 1133');

  it('change without touching the ground', () => {
    const { zones, labels } = replayEdits(block.grid, block.map, [
      { kind: 'rename', zone: 3, name: 'Gravel bank' },
      { kind: 'recolour', zone: 3, colour: '#7a8f3c' },
      { kind: 'rename', zone: 1, name: null },
    ]);
    expect(zones[2]).toEqual({ number: 3, name: 'Gravel bank', colour: '#7a8f3c' });
    expect(labels).toEqual(block.map.labels);
  });

  it('can be exchanged in one step, with name and ground', () => {
    const map = replayEdits(block.grid, block.map, [
      { kind: 'rename', zone: 3, name: 'Gravel bank' },
      { kind: 'renumber', numbers: [{ from: 3, to: 1 }, { from: 1, to: 3 }, { from: 2, to: 9 }] },
    ]);
    expect(shown(map.labels, 4)).toBe('3399 3311');
    expect(map.zones.map(({ number, name }) => [number, name])).toEqual([[1, 'Gravel bank'], [3, null], [9, null]]);
    expect(() => applyEdit(block.grid, block.map, { kind: 'renumber', numbers: [{ from: 1, to: 2 }] })).toThrow('Two zones would have the same number; give each its own, or merge them.');
  });
});

describe('labels made elsewhere', () => {
  const block = start('112 1.2');

  it('replace all labels as runs', () => {
    expect(runsFromLabels(block.map.labels)).toEqual([1, 2, 2, 1, 1, 1, 0, 1, 2, 1]);
    expect(after(block, { kind: 'replace', runs: [3, 3, 1, 1, 0, 1, 1, 1], reason: 'snapped' })).toBe('333 1.1');
  });

  it('are refused when they do not fit the block', () => {
    const replace = (runs: number[]): ZoneEdit => ({ kind: 'replace', runs, reason: 'restored' });
    for (const [runs, message] of [
      [[1, 5], /fill 5 of 6 cells/],
      [[1, 7], /run 1 does not fit/],
      [[1, 5, 2], /run 2 does not fit/],
      [[1, 6], /does not fill the block cell by cell/],
      [[0, 6], /does not fill the block cell by cell/],
      [[77, 4, 0, 1, 77, 1], /cannot have the number 77/],
      [[1.5, 6], /run 1 does not fit/],
    ] as const) expect(() => applyEdit(block.grid, block.map, replace([...runs]))).toThrow(message);
  });

  it('come back from runs as they were', () => {
    const random = seededRandom(6);
    const labels = Uint8Array.from({ length: 500 }, () => randomIndex(random, 3));
    expect(labelsFromRuns(runsFromLabels(labels), 500)).toEqual(labels);
    expect(runsFromLabels(new Uint8Array(0))).toEqual([]);
  });
});

describe('cleaning', () => {
  it('gives patches below an area to the neighbour with the longest border', () => {
    // Cells of 1 m: three cells are 0.0003 ha.
    expect(after(start('11111 12111 11133 11133'), { kind: 'clean', minPatchHa: 0.0003 })).toBe('11111 11111 11133 11133');
  });
});

describe('a zoning', () => {
  it('must fill exactly the block', () => {
    const grid = pictureGrid(picture('11.'));
    expect(() => zoneMapOf(grid, Uint8Array.from([1, 0, 0]))).toThrow(/does not fill the block/);
    expect(() => zoneMapOf(grid, Uint8Array.from([1, 1, 1]))).toThrow(/does not fill the block/);
    expect(() => zoneMapOf(grid, Uint8Array.from([1, 1]))).toThrow(/has 2 cells; the grid has 3/);
  });
});

/** A random edit that may or may not make sense for the zones. */
function randomEdit(random: Random, grid: Grid, map: ZoneMap): ZoneEdit {
  const { zones } = map;
  const zone = () => zones[randomIndex(random, zones.length)]!.number;
  const anywhere = () => place(random() * grid.cols * grid.cellSizeM, random() * grid.rows * grid.cellSizeM);
  const makers: (() => ZoneEdit)[] = [
    () => ({ kind: 'merge', zones: [zone(), zone()], into: zone() }),
    () => ({ kind: 'split', zone: zone(), lineLonLat: Array.from({ length: 2 + randomIndex(random, 3) }, anywhere) }),
    () => ({ kind: 'give', toZone: random() < 0.2 ? 1 + randomIndex(random, 60) : zone(), ground: { shape: 'polygons', polygonsLonLat: [[[anywhere(), anywhere(), anywhere(), anywhere()]]] } }),
    () => ({ kind: 'give', toZone: zone(), ground: { shape: 'strips', strips: [{ lineLonLat: [anywhere(), anywhere(), anywhere()], widthM: 1 + 6 * random() }] } }),
    () => ({ kind: 'give', toZone: zone(), ground: { shape: 'cells', cells: Array.from({ length: 30 }, () => randomIndex(random, grid.share.length)) } }),
    () => ({ kind: 'renumber', numbers: [{ from: zone(), to: 1 + randomIndex(random, 60) }] }),
    () => {
      const [one, other] = [zone(), zone()];
      return { kind: 'renumber', numbers: [{ from: one, to: other }, { from: other, to: one }] };
    },
    () => ({ kind: 'recolour', zone: zone(), colour: random() < 0.5 ? null : '#56B4E9' }),
    () => ({ kind: 'rename', zone: zone(), name: `N${randomIndex(random, 100)}` }),
    () => ({ kind: 'clean', minPatchHa: random() * 0.01 }),
    () => ({ kind: 'clean', minPatchHa: random() * 0.01, narrowestM: 8 * random() }),
    () => ({ kind: 'replace', runs: runsFromLabels(map.labels.map((label) => (label === 0 ? 0 : ((label * 7) % 60) + 1))), reason: 'snapped' }),
  ];
  return makers[randomIndex(random, makers.length)]!();
}

describe('any sequence of edits', () => {
  it.each([1, 2, 3, 4, 5, 6])('leaves each cell inside with exactly one zone, no gap, no overlap, and can be replayed and undone (sequence %i)', (seed) => {
    const random = seededRandom(seed);
    const corners = (points: readonly (readonly [number, number])[]) => points.map(([east, south]) => [CORNER.x + east, CORNER.y - south] as const);
    const outline = corners([[5, 3], [9, 47], [60, 44.5], [71, 20], [40, 1], [5, 3]]);
    const pond = corners([[30, 20], [40, 19], [38, 27], [30, 20]]);
    const grid = gridOfOutline([[outline, pond]], CORNER.epsg, 2);
    const drawn = grid.inside.map((inside, cell) => (inside === 1 ? 1 + Math.floor((cell % grid.cols) / 12) : 0));
    const base = zoneMapOf(grid, drawn);
    const frozen = base.labels.slice();
    const edits: ZoneEdit[] = [];
    const history: ZoneMap[] = [base];
    for (let tries = 0; tries < 120; tries++) {
      const now = history[history.length - 1]!;
      const edit = randomEdit(random, grid, now);
      const before = now.labels.slice();
      try {
        history.push(applyEdit(grid, now, edit));
        edits.push(edit);
      } catch (error) {
        expect((error as Error).name).toBe('AnalysisError');
      }
      expect(now.labels).toEqual(before);
    }
    expect(edits.length).toBeGreaterThan(30);
    for (const map of history) {
      for (let cell = 0; cell < map.labels.length; cell++) if (map.labels[cell]! > 0 !== (grid.inside[cell] === 1)) throw new Error(`cell ${cell} gained or lost its zone`);
      expect(map.zones.map(({ number }) => number)).toEqual([...new Set(map.labels)].filter((label) => label > 0).sort((a, b) => a - b));
    }
    // Undo is replay of fewer edits; stored edits survive a trip through JSON.
    for (const count of [0, 1, Math.floor(edits.length / 2), edits.length]) {
      const stored = JSON.parse(JSON.stringify(edits.slice(0, count))) as ZoneEdit[];
      expect(replayEdits(grid, base, stored)).toEqual(history[count]);
    }
    expect(base.labels).toEqual(frozen);
    for (const map of [history[Math.floor(history.length / 2)]!, history[history.length - 1]!]) {
      const zones = polygonise(grid, map.labels);
      expect(zones.reduce((sum, { areaM2 }) => sum + areaM2, 0) / polygonsArea(grid.outlineXY)).toBeCloseTo(1, 9);
      const uncovered = Float64Array.from(grid.share);
      const rings = zones.flatMap(({ polygonsXY }) => polygonsXY.map((polygon) => polygon.map((ring) => toCellRing(ring, grid))));
      for (const polygon of rings) eachCellShare([polygon], grid, (cell, share) => (uncovered[cell]! -= share));
      expect(uncovered.reduce((worst, part) => Math.max(worst, Math.abs(part)), 0)).toBeLessThan(1e-6);
    }
  });
});
