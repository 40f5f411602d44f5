import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { adjustedRandIndex } from '../../shared/analysis/agreement.ts';
import { gridOfOutline, type Cells, type Grid } from '../../shared/analysis/grid.ts';
import { smallPatches } from '../../shared/analysis/sieve.ts';
import { findPatches } from '../../shared/analysis/sievePatches.ts';
import { patchesPerZone } from '../../shared/analysis/zoningClean.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import { standardise } from '../../shared/analysis/standardise.ts';
import { leaveOneOutRSquared } from '../../shared/analysis/verdictReadings.ts';
import { makeZoning } from '../../shared/analysis/zoning.ts';
import { featureTable, fitZones } from '../../shared/analysis/zoningFit.ts';
import type { ZoningInput, ZoningLayer, ZoningStage } from '../../shared/analysis/zoningTypes.ts';
import { labelVines, rowRuns } from '../../shared/analysis/snapToRows.ts';
import { polygonsArea } from '../../shared/geo/rings.ts';
import { buildRows } from '../../shared/geo/rows.ts';
import { polygonsFromUtm } from '../../shared/geo/utm.ts';
import { vineTable } from '../../shared/geo/vines.ts';
import { noiseBlock, zonedBlock } from '../bench/simulatedBlock.ts';

const block = zonedBlock({ areaHa: 2, cellSizeM: 4, random: seededRandom(12), k: 3, difficulty: 0.3, edgeM: 6 });
const { grid } = block;
const layer = (id: string, cells: Cells, rest: Partial<ZoningLayer> = {}): ZoningLayer => ({ id, type: id, role: 'evidence', kind: 'number', cells, weight: null, ...rest });
const vigour = layer('vigour', block.vigour);
const conductivity = layer('conductivity', block.conductivity);
const input: ZoningInput = { grid, layers: [vigour, conductivity], options: { seed: 7, smallestPatchHa: 0.03, drawAll: true } };
const result = makeZoning(input);
const insideTruth = [...block.truth].filter((_, cell) => grid.inside[cell] === 1);
const insideOf = (labels: Uint8Array) => [...labels].filter((_, cell) => grid.inside[cell] === 1);

describe('a zoning', () => {
  it('finds the three zones that are there', () => {
    expect(result).toMatchObject({ advisedK: 3, chosenK: 3, verdict: { verdict: 'several' } });
    expect(adjustedRandIndex(insideTruth, insideOf(result.candidates[2]!.labels))).toBeGreaterThan(0.8);
  });

  it('keeps a candidate and its evidence for every number from 1 to 6, with one zone as the first', () => {
    expect(result.candidates.map(({ k }) => k)).toEqual([1, 2, 3, 4, 5, 6]);
    expect(result.evidence.map(({ k }) => k)).toEqual([1, 2, 3, 4, 5, 6]);
    expect(result.evidence[0]).toMatchObject({ varianceExplained: expect.closeTo(0, 9), silhouette: null, gap: null, patches: 1 });
    const explained = result.evidence.map(({ varianceExplained }) => varianceExplained);
    expect(explained).toEqual([...explained].sort((a, b) => a - b));
    expect(new Set(insideOf(result.candidates[0]!.labels))).toEqual(new Set([1]));
  });

  it('gives every cell inside exactly one zone and no cell outside any', () => {
    for (const { labels, zones } of result.candidates) {
      labels.forEach((label, cell) => expect(label > 0).toBe(grid.inside[cell] === 1));
      expect(Math.max(...labels)).toBe(zones.length);
    }
  });

  it('has areas that add up to the block for every number of zones', () => {
    for (const { zones } of result.candidates) {
      expect(zones.reduce((sum, zone) => sum + zone.areaM2, 0) / polygonsArea(grid.outlineXY)).toBeCloseTo(1, 3);
    }
  });

  it('numbers zones by the mean of the first layer', () => {
    for (const { zones } of result.candidates) {
      const means = zones.map((zone) => zone.layers[0]!.mean!);
      expect(means).toEqual([...means].sort((a, b) => a - b));
    }
  });

  it('leaves no patch below the smallest', () => {
    const cellsNeeded = Math.ceil(300 / 16);
    for (const { labels } of result.candidates) expect(smallPatches(labels, grid.cols, { minCells: cellsNeeded })).toEqual([]);
  });

  it('gives the same bytes for the same input', () => {
    expect(JSON.stringify(makeZoning(input))).toBe(JSON.stringify(result));
  });

  it('gives the same three zones whether three are advised or asked for', () => {
    const fixed = makeZoning({ ...input, options: { ...input.options, zones: 3 } });
    expect(fixed.candidates[2]!.labels).toEqual(result.candidates[2]!.labels);
    const five = makeZoning({ ...input, options: { ...input.options, zones: 5 } });
    expect(five).toMatchObject({ chosenK: 5, advisedK: 3, warnings: [{ code: 'number-fixed' }] });
  });

  it('gives the same zones, numbers aside, whatever the unit and order of the layers', () => {
    const scaled = layer('vigour', block.vigour.map((value) => 1000 - 250 * value));
    const turned = makeZoning({ ...input, layers: [conductivity, scaled] });
    expect(adjustedRandIndex(insideOf(turned.candidates[2]!.labels), insideOf(result.candidates[2]!.labels))).toBeGreaterThan(0.98);
  });

  it('never changes what it is given', () => {
    const before = [block.vigour.slice(), block.conductivity.slice(), grid.inside.slice()];
    makeZoning(input);
    expect([block.vigour, block.conductivity, grid.inside]).toEqual(before);
  });

  it('says per layer how far the zones are apart in the layer’s own unit', () => {
    const [difference] = result.candidates[2]!.differences;
    const means = result.candidates[2]!.zones.map((zone) => zone.layers[0]!.mean!);
    expect(difference).toMatchObject({ layerId: 'vigour', lowest: means[0], highest: means[2] });
    expect(difference!.withinSd).toBeLessThan(difference!.highest - difference!.lowest);
  });

  it('doubts cells near another zone more than cells amid their own', () => {
    const { doubt, zones } = result.candidates[2]!;
    expect(doubt.filter((value, cell) => grid.inside[cell] === 1 && !(value >= 0 && value <= 1))).toHaveLength(0);
    for (const zone of zones) expect(zone.doubtfulShare).toBeGreaterThan(0);
    for (const zone of zones) expect(zone.doubtfulShare).toBeLessThan(0.5);
    expect(result.candidates[0]!.zones[0]!.doubtfulShare).toBe(0);
  });

  it('tells its stages in order, ending with everything done', () => {
    const stages: [ZoningStage, number][] = [];
    makeZoning(input, (stage, share) => stages.push([stage, share]));
    expect(stages.map(([stage]) => stage)).toEqual(['prepare', 'layer advice', 'evidence', 'clusters', 'quality', 'clean-up', 'polygons', 'statistics', 'fruit']);
    expect(stages.at(-1)![1]).toBe(1);
  });

  it('draws the chosen number only, unless asked for all', () => {
    const drawn = makeZoning({ ...input, options: { ...input.options, drawAll: false } }).candidates.map(({ zones }) => zones[0]!.polygonsLonLat !== null);
    expect(drawn).toEqual([false, false, true, false, false, false]);
  });
});

describe('borders of a zoning along the rows', () => {
  const fine = zonedBlock({ areaHa: 1.2, cellSizeM: 2, random: seededRandom(12), k: 3, difficulty: 0.3, edgeM: 6 });
  const rows = buildRows(polygonsFromUtm(fine.grid.outlineXY, fine.grid.epsg), { bearingDeg: 20, bearingKind: 'grid', epsg: fine.grid.epsg, rowSpacingM: 2.5, vineSpacingM: 1.2, headlandM: 3 });
  const planting = { rows, vines: vineTable(rows) };
  const plain = { grid: fine.grid, layers: [layer('vigour', fine.vigour), layer('conductivity', fine.conductivity)], options: { ...input.options, zones: 3 } };
  const runsOf = (labels: Uint8Array) => rowRuns(planting.vines, labelVines(fine.grid, labels, planting.vines));
  const shortRuns = (labels: Uint8Array) => runsOf(labels).filter(({ fromOrdinal, toOrdinal }) => (toOrdinal - fromOrdinal + 1) * 1.2 < 15).length;
  /** Share of the vines that stand in another zone than most of their row; cells are nearly as wide as rows, so it is not quite nothing. */
  const strayShare = (labels: Uint8Array) => {
    const counts = new Map<number, Map<number, number>>();
    for (const { rowIndex, fromOrdinal, toOrdinal, label } of runsOf(labels)) {
      const row = counts.get(rowIndex) ?? new Map<number, number>();
      counts.set(rowIndex, row.set(label, (row.get(label) ?? 0) + toOrdinal - fromOrdinal + 1));
    }
    return 1 - [...counts.values()].reduce((sum, row) => sum + Math.max(...row.values()), 0) / planting.vines.count;
  };

  it('leave a harvester the row and pickers no short stretches, and fill the block', () => {
    const [free, harvester, pickers] = (['free', 'wholeRow', 'partRow'] as const).map((borders) => makeZoning({ ...plain, planting, options: { ...plain.options, borders } }).candidates[2]!);
    for (const { labels, zones } of [harvester!, pickers!]) {
      labels.forEach((label, cell) => expect(label > 0).toBe(fine.grid.inside[cell] === 1));
      expect(zones.reduce((sum, { areaM2 }) => sum + areaM2, 0) / polygonsArea(fine.grid.outlineXY)).toBeCloseTo(1, 6);
    }
    expect(strayShare(free!.labels)).toBeGreaterThan(0.15);
    expect(strayShare(harvester!.labels)).toBeLessThan(0.02);
    expect(shortRuns(pickers!.labels)).toBeLessThan(shortRuns(free!.labels) / 4);
    const likeFree = ({ labels }: { labels: Uint8Array }) => adjustedRandIndex([...free!.labels], [...labels]);
    expect(likeFree(pickers!)).toBeGreaterThan(likeFree(harvester!));
  });

  it('say when the rows run across what was found', () => {
    const across = makeZoning({ ...plain, planting, options: { ...plain.options, borders: 'wholeRow' } });
    expect(across.warnings.find(({ code }) => code === 'rows-against-ground')!.figures.share).toBeGreaterThan(0.2);
    expect(makeZoning({ ...plain, planting, options: { ...plain.options, borders: 'partRow' } }).warnings.filter(({ code }) => code === 'rows-against-ground')).toEqual([]);
  });

  it('leave in doubt whatever the rows put into another zone than its layers', () => {
    const [free, harvester] = (['free', 'wholeRow'] as const).map((borders) => makeZoning({ ...plain, planting, options: { ...plain.options, borders } }).candidates[2]!);
    const cells = [...free!.labels.keys()].filter((cell) => free!.labels[cell]! > 0);
    const moved = cells.filter((cell) => harvester!.labels[cell] !== free!.labels[cell]);
    expect(moved.length / cells.length).toBeGreaterThan(0.2);
    expect(moved.filter((cell) => harvester!.doubt[cell] !== 1)).toEqual([]);
    const stayed = cells.filter((cell) => harvester!.labels[cell] === free!.labels[cell]);
    expect(stayed.filter((cell) => harvester!.doubt[cell] !== free!.doubt[cell])).toEqual([]);
    const doubtful = (zones: (typeof result.candidates)[number]['zones']) => zones.reduce((sum, { doubtfulShare, areaM2 }) => sum + doubtfulShare * areaM2, 0) / zones.reduce((sum, { areaM2 }) => sum + areaM2, 0);
    expect(doubtful(harvester!.zones)).toBeGreaterThan(doubtful(free!.zones) + 0.1);
  });

  it('are what fruit is tested on, since those zones are picked', () => {
    const cells = labelVines(fine.grid, fine.truth, planting.vines);
    const random = seededRandom(8);
    const sampled = Array.from({ length: 60 }, () => Math.floor(random() * planting.vines.count)).filter((vine) => cells[vine]! > 0);
    const cellOf = (vine: number) => Math.floor((fine.grid.y0 - planting.vines.y[vine]!) / 2) * fine.grid.cols + Math.floor((planting.vines.x[vine]! - fine.grid.x0) / 2);
    const brix = { measure: 'brix', values: sampled.map((vine) => ({ cell: cellOf(vine), row: null, value: 21 + cells[vine]! + 0.3 * random() })) };
    const explained = (['free', 'wholeRow'] as const).map((borders) => {
      const { fruit, candidates } = makeZoning({ ...plain, planting, readings: [brix], options: { ...plain.options, borders } });
      const zones = brix.values.map(({ cell }) => candidates[2]!.labels[cell]!);
      expect(fruit.tests[0]!.leaveOneOutRSquared).toBeCloseTo(leaveOneOutRSquared(brix.values.map(({ value }) => value), zones), 9);
      return fruit.tests[0]!.leaveOneOutRSquared;
    });
    expect(explained[0]).toBeGreaterThan(explained[1]! + 0.1);
  });

  it('need rows', () => {
    expect(() => makeZoning({ ...plain, options: { ...plain.options, borders: 'wholeRow' } })).toThrow(/lay out its rows/);
  });
});

describe('layers and weights in a zoning', () => {
  it('leaves a layer of weight 0 out and keeps its statistics', () => {
    const wild = layer('elevation', block.vigour.map((_, cell) => (cell * 7919) % 101), { role: 'context' });
    const withWild = makeZoning({ ...input, layers: [vigour, conductivity, wild] });
    expect(withWild.candidates[2]!.labels).toEqual(result.candidates[2]!.labels);
    expect(withWild.weights).toEqual([{ layerId: 'vigour', weight: 1 }, { layerId: 'conductivity', weight: 1 }, { layerId: 'elevation', weight: 0 }]);
    expect(withWild.candidates[2]!.zones[0]!.layers.map(({ layerId }) => layerId)).toEqual(['vigour', 'conductivity', 'elevation']);
  });

  it('numbers zones by the first layer that has a weight, whatever stands before it', () => {
    const against = layer('elevation', conductivity.cells.map((value) => -value), { role: 'context' });
    for (const first of [against, { ...layer('other', against.cells), weight: 0 }]) {
      const { zones } = makeZoning({ ...input, layers: [first, conductivity, vigour] }).candidates[2]!;
      const means = zones.map((zone) => zone.layers[1]!.mean!);
      expect(means).toEqual([...means].sort((a, b) => a - b));
    }
  });

  it('takes the person’s weights over the advised ones', () => {
    const soil = layer('soil', Float32Array.from(block.truth, (zone) => (zone === 0 ? NaN : zone)), { role: 'context', kind: 'class', weight: 4 });
    const chosen = makeZoning({ ...input, layers: [vigour, { ...conductivity, weight: 0 }, soil] });
    expect(chosen.weights.map(({ weight }) => weight)).toEqual([1, 0, 4]);
    expect(adjustedRandIndex(insideTruth, insideOf(chosen.candidates[2]!.labels))).toBeGreaterThan(0.95);
  });

  it('makes the same zones of two equal layers as of one', () => {
    const twin = layer('again', block.vigour, { type: 'vigour' });
    const alone = makeZoning({ ...input, layers: [vigour] });
    const twice = makeZoning({ ...input, layers: [vigour, twin] });
    expect(adjustedRandIndex(insideOf(alone.candidates[1]!.labels), insideOf(twice.candidates[1]!.labels))).toBeGreaterThan(0.97);
    expect(twice.advisedWeights.map(({ code }) => code)).toEqual(['repeats', 'repeats']);
    const components = makeZoning({ ...input, layers: [vigour, twin], options: { ...input.options, principalComponents: true } });
    expect(components.componentShares![0]).toBeCloseTo(1, 6);
    expect(adjustedRandIndex(insideOf(alone.candidates[1]!.labels), insideOf(components.candidates[1]!.labels))).toBeGreaterThan(0.97);
  });

  it('zones cells with missing values by what they have, and says how many', () => {
    const holed = block.conductivity.map((value, cell) => (cell % grid.cols < grid.cols / 3 ? NaN : value));
    const patchy = makeZoning({ ...input, layers: [vigour, layer('conductivity', holed)] });
    patchy.candidates[2]!.labels.forEach((label, cell) => expect(label > 0).toBe(grid.inside[cell] === 1));
    expect(patchy.warnings.map(({ code }) => code)).toEqual(expect.arrayContaining(['layer-coverage', 'cells-filled']));
    expect(adjustedRandIndex(insideTruth, insideOf(patchy.candidates[2]!.labels))).toBeGreaterThan(0.5);
  });

  it('leaves out a layer that is the same everywhere and says so', () => {
    const flat = makeZoning({ ...input, layers: [vigour, conductivity, layer('flat', new Float32Array(block.vigour.length).fill(4))] });
    expect(flat.warnings).toContainEqual({ code: 'layer-constant', about: 'flat', figures: {} });
    expect(flat.candidates[2]!.labels).toEqual(result.candidates[2]!.labels);
  });

  it.each<[string, Partial<ZoningInput>, RegExp]>([
    ['no layer', { layers: [] }, /No layer was chosen/],
    ['a layer of another grid', { layers: [layer('vigour', block.vigour.slice(5))] }, /"vigour" has \d+ cells; the grid has \d+/],
    ['the same layer twice', { layers: [vigour, vigour] }, /"vigour" was given twice/],
    ['seven zones', { options: { zones: 7 } }, /7 zones cannot be made; .* 1 to 6/],
    ['all weights 0', { layers: [{ ...vigour, weight: 0 }] }, /weight 0/],
    ['a negative weight', { layers: [{ ...vigour, weight: -1 }] }, /weight must be 0 or/],
    ['too little coverage', { layers: [layer('vigour', block.vigour.map((value, cell) => (cell % 5 === 0 ? value : NaN)))] }, /covers 20 % of the block; 50 % is needed/],
    ['a reading that is no number', { readings: [{ measure: 'brix', values: [{ cell: 1, row: null, value: NaN }] }] }, /"brix" is not a number/],
  ])('refuses %s with a sentence that says what to do', (_name, change, message) => {
    expect(() => makeZoning({ ...input, ...change })).toThrow(message);
  });
});

describe('the verdict of a zoning', () => {
  it('is to treat pure noise as one, whatever number is asked for', () => {
    const noise = noiseBlock('white', { areaHa: 2, cellSizeM: 4, random: seededRandom(3) });
    const layers = [layer('vigour', noise.vigour), layer('conductivity', noise.conductivity)];
    expect(makeZoning({ grid: noise.grid, layers })).toMatchObject({ verdict: { verdict: 'one' }, advisedK: 1, chosenK: 1 });
    expect(makeZoning({ grid: noise.grid, layers, options: { zones: 4 } })).toMatchObject({ verdict: { verdict: 'one' }, advisedK: 1, chosenK: 4 });
  });

  it('advises no number that cannot be had, and says why it is one', () => {
    const wide = makeZoning({ ...input, options: { ...input.options, smallestPatchHa: 1.5 } });
    expect(wide).toMatchObject({ verdict: { verdict: 'several' }, advisedK: 1, chosenK: 1 });
    expect(wide.warnings.map(({ code }) => code)).toEqual(['none-workable']);
    expect(makeZoning({ ...input, options: { ...input.options, smallestPatchHa: 1.5, zones: 2 } }).warnings.map(({ code }) => code)).toEqual(['none-workable', 'zone-vanished', 'number-fixed']);
    expect(result.warnings).toEqual([]);
  });

  it('has no measured layer to go by when only terrain is given', () => {
    const terrain = makeZoning({ ...input, layers: [{ ...vigour, role: 'context' }] });
    expect(terrain.verdict).toMatchObject({ isJudged: false });
    expect(terrain.verdict.reasons[0]!.code).toBe('no-measured-layer');
  });

  it('is tested on fruit when there are readings', () => {
    const random = seededRandom(5);
    const cells = Array.from(grid.inside.keys()).filter((cell) => grid.inside[cell] === 1);
    const vines = Array.from({ length: 60 }, () => cells[Math.floor(random() * cells.length)]!);
    const brix = { measure: 'brix', values: vines.map((cell) => ({ cell, row: `${cell % 6}`, value: 21 + block.truth[cell]! + 0.5 * random() })) };
    expect(makeZoning({ ...input, readings: [brix] }).fruit).toMatchObject({ state: 'agrees', tests: [{ measure: 'brix', n: 60 }] });
    expect(result.fruit.state).toBe('untested');
  });
});

describe('real satellite bands and elevation', () => {
  const rows = readFileSync(new URL('../fixtures/olinda/blockCells.csv', import.meta.url), 'utf8').trim().split('\n').slice(1).map((line) => line.split(',').map(Number));
  const [cols, height] = [104, 93];
  const whole = gridOfOutline([[[[0, 0], [cols * 28.5, 0], [cols * 28.5, height * 28.5], [0, height * 28.5], [0, 0]]]], 31985, 28.5);
  const inside = new Uint8Array(cols * height);
  const [index, elevation] = [new Float32Array(cols * height).fill(NaN), new Float32Array(cols * height).fill(NaN)];
  for (const [col, row, ndvi, metres] of rows) {
    const cell = row! * cols + col!;
    inside[cell] = 1;
    index[cell] = ndvi!;
    elevation[cell] = metres!;
  }
  const cells = { ...whole, inside, share: Float32Array.from(inside) };
  const columns = [index, elevation].map((values) => standardise(cells, values, { clip: [0, 1] }).cells);
  const fits = fitZones(featureTable(cells, columns, false), 1);

  // Best of many starts with scikit-learn 1.2.1 and R 4.2.2.
  it.each([
    [2, 6449.564],
    [3, 3972.2],
    [4, 3180.749],
    [5, 2610.441],
    [6, 2174.411],
  ])('reach the reference within-sum of squares for %i zones', (k, best) => {
    expect(fits[k - 1]!.inertia / best).toBeGreaterThan(0.9999);
    expect(fits[k - 1]!.inertia / best).toBeLessThan(k <= 4 ? 1.001 : 1.01);
  });
});

describe('patches of zones', () => {
  const count = (rows: string[]) => [...patchesPerZone({ cols: rows[0]!.length, rows: rows.length } as Grid, Uint8Array.from(rows.join(''), Number)).slice(0, 4)];

  it('are cells joined by edges, corners apart', () => {
    expect(count(['112', '122', '211'])).toEqual([0, 2, 2, 0]);
    expect(count(['12', '21'])).toEqual([0, 2, 2, 0]);
  });

  it('are one when they join further down or around a hole', () => {
    expect(count(['101', '101', '111'])).toEqual([0, 1, 0, 0]);
    expect(count(['1111', '1221', '1221', '1111'])).toEqual([0, 1, 1, 0]);
    expect(count(['10101', '11111', '30303'])).toEqual([0, 1, 0, 3]);
  });

  it('agree with the flood fill of the sieve', () => {
    const random = seededRandom(6);
    const labels = Uint8Array.from({ length: 40 * 30 }, () => Math.floor(3 * random()));
    const filled = new Int32Array(256);
    for (const label of findPatches(labels, 40, 4).labels) filled[label]!++;
    expect(patchesPerZone({ cols: 40, rows: 30 } as Grid, labels)).toEqual(filled);
  });
});
