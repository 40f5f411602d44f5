import { describe, expect, it } from 'vitest';
import { cleanPoints } from '../../shared/analysis/cleanPoints.ts';
import { gridOfOutline } from '../../shared/analysis/grid.ts';
import { layerFindings, type LayerFacts } from '../../shared/analysis/layerFindings.ts';
import { layerStats } from '../../shared/analysis/layerStats.ts';

// 100 by 60 m in cells of 2 m: 50 by 30 cells, all inside.
const grid = gridOfOutline([[[[500_000, 4_700_000], [500_100, 4_700_000], [500_100, 4_700_060], [500_000, 4_700_060], [500_000, 4_700_000]]]], 32630, 2);
const facts: LayerFacts = { type: 'vigour', index: 'ndvi', measuredOn: '2025-07-14', pixelSizeM: 0.25, rowSpacingM: 2.5, alleys: 'mown', steelTrellis: null, pointCount: null };

function findings(value: (col: number, row: number) => number, change: Partial<LayerFacts> = {}) {
  const cells = Float32Array.from({ length: grid.cols * grid.rows }, (_, cell) => value(cell % grid.cols, Math.floor(cell / grid.cols)));
  return layerFindings({ grid, cells, stats: layerStats(grid, cells), facts: { ...facts, ...change } });
}
const slope = (col: number, row: number) => 0.3 + col / 200 + row / 500;
const codes = (found: ReturnType<typeof findings>) => found.map((finding) => `${finding.severity} ${finding.code}`);

describe('findings about a layer', () => {
  it('are none for a full, dated picture of fine pixels', () => expect(findings(slope)).toEqual([]));

  it('call 60 % of coverage 60 % and red, 95 % amber, 99 % nothing', () => {
    expect(findings((col, row) => (col < 30 ? slope(col, row) : NaN))[0]).toMatchObject({ code: 'partial', severity: 'red', params: { percent: 60, needed: 90 } });
    expect(codes(findings((col, row) => (row * 50 + col < 1425 ? slope(col, row) : NaN)))).toEqual(['amber gaps']);
    expect(codes(findings((col, row) => (row * 50 + col < 1485 ? slope(col, row) : NaN)))).toEqual([]);
  });

  it('see values that the index cannot have, and count them', () => {
    expect(findings((col, row) => (col === 0 ? 1.5 : slope(col, row)))[0]).toMatchObject({ code: 'impossible', params: { count: 30, percent: 2, value: 1.5, min: -1, max: 1 } });
    expect(codes(findings((col, row) => 20 + 100 * slope(col, row), { index: null }))).toEqual([]);
    expect(codes(findings((col) => col - 3, { type: 'conductivity', index: null, pixelSizeM: null, steelTrellis: 'no' }))).toEqual(['red impossible']);
  });

  it('see one value everywhere, and a picture cut off at its end', () => {
    expect(codes(findings(() => 0.4))).toEqual(['red constant']);
    expect(codes(findings((col, row) => Math.min(0.5, slope(col, row))))).toEqual(['amber saturated']);
  });

  it('ask for the day, fine pixels and mown alleys of a vigour picture, not of a soil map', () => {
    expect(codes(findings(slope, { measuredOn: null, pixelSizeM: 1, alleys: 'green' }))).toEqual(['amber noDate', 'amber alleyMixed', 'amber greenAlleys']);
    expect(codes(findings(slope, { type: 'soilNumber', index: null, measuredOn: null, alleys: null }))).toEqual([]);
  });

  it('tell pixels of half a row spacing from pixels of a tenth', () => {
    expect(codes(findings(slope, { pixelSizeM: 1.25 }))).toEqual(['amber alleyMixed']);
    expect(codes(findings(slope, { pixelSizeM: 0.5 }))).toEqual([]);
    expect(codes(findings(slope, { pixelSizeM: 10 }))).toEqual(['amber alleyMixed', 'note coarsePixels']);
  });

  it('say where they hold: gaps, impossible values and a cut-off end by their cells, a day that is missing by none', () => {
    const at = (found: ReturnType<typeof findings>, code: string) => [...(found.find((finding) => finding.code === code)?.cells ?? [])].flatMap((mark, cell) => (mark === 1 ? cell : []));
    const column = (col: number) => Array.from({ length: 30 }, (_, row) => row * 50 + col);
    expect(at(findings((col, row) => (col === 7 || col === 8 ? NaN : slope(col, row))), 'gaps')).toEqual([...column(7), ...column(8)].sort((a, b) => a - b));
    expect(at(findings((col, row) => (col === 3 ? -2 : slope(col, row))), 'impossible')).toEqual(column(3));
    expect(at(findings((col, row) => (col < 4 ? 0.1 : slope(col, row))), 'saturated')).toHaveLength(4 * 30);
    expect(findings(slope, { measuredOn: null })[0]!.cells).toBeUndefined();
  });

  it('weigh the growth stage', () => {
    expect(codes(findings(slope, { growthStage: 'flowering' }))).toEqual(['amber earlyCanopy']);
    expect(codes(findings(slope, { growthStage: 'leafFall' }))).toEqual(['amber leafFall']);
    expect(codes(findings(slope, { growthStage: 'unknown' }))).toEqual(['note noStage']);
    expect(codes(findings(slope, { growthStage: 'veraison' }))).toEqual([]);
  });

  it('stop a file whose outline is 3.28 times that of a block, and doubt a canopy that is not apart from the alleys', () => {
    expect(codes(findings(slope, { scaleTimes: 3.2808 }))).toEqual(['red scale']);
    expect(codes(findings(slope, { canopy: { threshold: 0.4, separability: 0.8, share: 0.3, split: { valley: 0.1, kinds: 'two' } } }))).toEqual(['note canopyOnly']);
    expect(codes(findings(slope, { canopy: { threshold: 0.4, separability: 0.4, share: 0.3, split: { valley: 0.1, kinds: 'two' } } }))).toEqual(['amber canopyUnclear', 'note canopyOnly']);
    expect(codes(findings(slope, { canopy: { threshold: null, separability: 0.1, share: 0.3, split: null } }))).toEqual(['amber rowsMissCanopy', 'note canopyByRows']);
    expect(codes(findings(slope, { alleys: 'green', canopy: { threshold: null, separability: 0.9, share: 0.3, split: null } }))).toEqual(['note canopyByRows']);
    expect(codes(findings(slope, { alleys: 'green', canopy: { threshold: 0.4, separability: 0.8, share: 0.3, split: { valley: 0.1, kinds: 'two' } } }))).toEqual(['amber greenAlleys', 'note canopyOnly']);
  });

  it('doubt a canopy of one hump and one that is the greenest of three kinds', () => {
    const canopy = (valley: number, kinds: 'two' | 'three' | 'patchy') => codes(findings(slope, { canopy: { threshold: 0.4, separability: 0.7, share: 0.3, split: { valley, kinds } } }));
    expect(canopy(0.95, 'two')).toEqual(['amber canopyUnclear', 'note canopyOnly']);
    expect(canopy(0.3, 'three')).toEqual(['amber canopyOfThree', 'note canopyOnly']);
    expect(canopy(0.3, 'patchy')).toEqual(['amber canopyPatchy', 'note canopyOnly']);
  });

  it('doubt heights whose unit the file or the land contradicts', () => {
    const heights = (value: number, facts: Partial<LayerFacts>, type = 'elevation') => findings((col) => value + col / 100, { type, index: null, heightUnit: 'm', heightUnitInFile: null, ...facts });
    expect(codes(heights(120, {}))).toEqual([]);
    expect(codes(heights(120, { heightUnitInFile: 'ft' }))).toEqual(['amber heightUnit']);
    expect(codes(heights(120, { heightUnit: 'ft', heightUnitInFile: 'm' }))).toEqual(['amber heightUnit']);
    expect(codes(heights(120, { heightUnit: 'ftUS', heightUnitInFile: 'ft' }))).toEqual([]);
    expect(codes(heights(120, { gridInFeet: true }))).toEqual(['note feetGrid']);
    expect(codes(heights(3900, {}))).toEqual(['amber high']);
    expect(codes(heights(3900, { heightUnit: 'ft' }))).toEqual([]);
    // A slope of 40° in metres is one of 14° when they were feet: tan⁻¹(0.3048 · tan 40°).
    const [steep] = heights(40, {}, 'slope');
    expect(steep).toMatchObject({ code: 'steep', severity: 'amber', params: { slope: 40, inFeet: 14 } });
    expect(codes(heights(12, {}, 'slope'))).toEqual([]);
  });

  it('say that haze cannot be seen in a picture from above it', () => {
    const band = (value: number) => new Float32Array(grid.cols * grid.rows).fill(value);
    const of = (pixelSizeM: number) => codes(findings(slope, { pixelSizeM, rowSpacingM: 100, bandMeans: { nir: band(4000), red: band(600) } }));
    expect(of(3)).toContain('note hazeUnseen');
    expect(of(0.1)).not.toContain('note hazeUnseen');
  });

  it('remember steel trellis and thin surveys', () => {
    expect(codes(findings((col) => 20 + col, { type: 'conductivity', index: null, pixelSizeM: null, steelTrellis: 'yes', pointCount: 12 }))).toEqual(['amber steelTrellis', 'amber fewPoints']);
  });
});

describe('points of a survey', () => {
  it('lose what the layer cannot hold and what was read standing still, with counts', () => {
    const { kept, setAside } = cleanPoints({ x: Float64Array.of(0, 0, 5, 9, 12), y: Float64Array.of(0, 0.01, 0, 0, 0), value: Float64Array.of(12, 13, -3, 14, NaN) }, { min: 0, max: 2000 });
    expect([...kept.value]).toEqual([12, 14]);
    expect([...kept.x]).toEqual([0, 9]);
    expect(setAside).toEqual([{ reason: 'missing', count: 1 }, { reason: 'impossible', count: 1 }, { reason: 'outside', count: 0 }, { reason: 'samePlace', count: 1 }, { reason: 'speed', count: 0 }, { reason: 'spike', count: 0 }]);
  });
});
