import { describe, expect, it } from 'vitest';
import type { ImportAnswers, UnderstoodFile } from '../../shared/contracts/imports.ts';
import { importQuestions } from '../../shared/importing/questions.ts';
import { dateInName, suggestBand, suggestPurpose, unitInName } from '../../shared/importing/suggestions.ts';

const placed = { reference: 'WGS 84 / UTM zone 30N', epsg: 32630, outlineLonLat: null };
const raster = (bands: (string | null)[]): UnderstoodFile => ({
  kind: 'raster', ...placed, width: 10, height: 10, pixelSizeM: 0.5, compression: 'none', verticalUnit: null, captured: null,
  bands: bands.map((description, i) => ({ index: i + 1, type: 'unsigned 8-bit', description, colour: null, noData: null })),
});
const field = (name: string, kind: string) => ({ name, kind, examples: ['1', '2'], distinct: 2, missing: 0 });
const shapes = (kinds: string[], ...fields: ReturnType<typeof field>[]): UnderstoodFile => ({ kind: 'vector', ...placed, layers: [{ name: 'a', geometryKinds: kinds, count: 3, fields }] });

const asked = (file: UnderstoodFile, answers: ImportAnswers = {}, fileName = 'file.tif') => importQuestions({ file, fileName, answers });
const open = (file: UnderstoodFile, answers: ImportAnswers = {}) => asked(file, answers).filter((question) => !question.answered).map((question) => question.code);

describe('questions about a picture', () => {
  it('begin with what it is for, and everything else depends on that', () => {
    expect(open(raster([null]))).toEqual(['purpose']);
    expect(open(raster([null]), { purpose: 'vigour' })).toEqual(['holds', 'capturedOn', 'alleys', 'growthStage']);
    expect(open(raster([null]), { purpose: 'elevation' })).toEqual(['unit']);
    expect(open(raster([null]), { purpose: 'soil' })).toEqual(['soilAs']);
    expect(open(raster([null]), { purpose: 'conductivity' })).toEqual(['unit', 'capturedOn', 'steelTrellis']);
  });

  it('with several bands ask for the bands of the index and no others', () => {
    const bands = raster(['Red', 'Near infrared', 'Red edge']);
    expect(open(bands, { purpose: 'vigour', value: 'ndvi' })).toEqual(['nirBand', 'redBand', 'capturedOn', 'alleys', 'growthStage', 'canopy']);
    expect(open(bands, { purpose: 'vigour', value: 'ndre' })).toEqual(['nirBand', 'redEdgeBand', 'capturedOn', 'alleys', 'growthStage', 'canopy']);
    expect(open(bands, { purpose: 'vigour', value: 'gndvi' })).toEqual(['nirBand', 'greenBand', 'capturedOn', 'alleys', 'growthStage', 'canopy']);
    expect(open(bands, { purpose: 'vigour', value: 'band' })).toEqual(['band', 'holds', 'capturedOn', 'alleys', 'growthStage']);
    expect(open(bands, { purpose: 'elevation' })).toEqual(['band', 'unit']);
  });

  it('suggest a band by its own words and leave the answer open', () => {
    const [, , nir, red] = asked(raster(['Red', 'Near infrared', 'Red edge']), { purpose: 'vigour', value: 'ndvi' });
    expect([nir!.suggestion, red!.suggestion]).toEqual([2, 1]);
    expect([nir!.answered, red!.answered]).toEqual([false, false]);
  });

  it('do not count an answer that was never offered', () => {
    expect(open(raster([null, null]), { purpose: 'vigour', value: 'ndvi', nirBand: 9, redBand: 1 })).toContain('nirBand');
    expect(open(raster([null]), { purpose: 'boundary' })).toEqual(['purpose']);
  });

  it('take "nobody knows the day" for an answer', () => {
    expect(open(raster([null]), { purpose: 'vigour', holds: 'ndvi', capturedOn: null, alleys: 'unknown', growthStage: 'unknown', canopy: 'all' })).toEqual([]);
  });
});

describe('questions about shapes', () => {
  it('offer classes only where a field of text or a choice makes them', () => {
    const soil = shapes(['Polygon'], field('TYPE', 'text'), field('AWC', 'number'));
    expect(open(soil, { purpose: 'soil', attribute: 'TYPE' })).toEqual([]);
    expect(open(soil, { purpose: 'soil', attribute: 'AWC' })).toEqual(['soilAs']);
    expect(asked(soil, { purpose: 'conductivity' }).find((question) => question.code === 'attribute')!.choices.map((choice) => choice.value)).toEqual(['AWC']);
  });

  it('of points offer no outlines, and of bare areas nothing else', () => {
    const choices = (file: UnderstoodFile) => asked(file)[0]!.choices.map((choice) => choice.value);
    expect(choices(shapes(['Point'], field('EC', 'number')))).not.toContain('boundary');
    expect(choices(shapes(['MultiPolygon']))).toEqual(['boundary']);
  });

  it('name outlines by a field or by none', () => {
    const outlines = shapes(['Polygon'], field('Nombre', 'text'));
    const [, names] = asked(outlines, { purpose: 'boundary' });
    expect(names).toMatchObject({ code: 'nameField', suggestion: 'Nombre', answered: false });
    expect(open(outlines, { purpose: 'boundary', nameField: null })).toEqual([]);
  });
});

describe('suggestions from names', () => {
  it.each([
    ['ndvi_2025-07-14.tif', 'vigour'],
    ['MDT_5m.tif', 'elevation'],
    ['suelo awc.tif', 'soil'],
    ['EC_deep.tif', 'conductivity'],
    ['IMG_0042.tif', null],
  ])('%s speaks of %s', (name, purpose) => expect(suggestPurpose(raster([null]), name)).toBe(purpose));

  it.each([
    ['flight_20250714_rgb.tif', '2025-07-14'],
    ['2024_02_29.tif', '2024-02-29'],
    ['2025-02-29.tif', null],
    ['block 20251301.tif', null],
    ['id 1202507141.tif', null],
  ])('the day in %s is %s', (name, day) => expect(dateInName(name)).toBe(day));

  it.each([
    ['ec_deep_mS_m', 'mS/m'],
    ['EC (dS/m)', 'dS/m'],
    ['conductivity', null],
  ])('the unit in %s is %s', (name, unit) => expect(unitInName(name, ['mS/m', 'dS/m', 'mS/cm', 'µS/cm'])).toBe(unit));

  it('a red edge band is not taken for red', () => {
    expect(suggestBand(raster(['Rededge', 'Red', 'NIR']), 'red')).toBe(2);
    expect(suggestBand(raster(['Rededge', 'Red', 'NIR']), 'redEdge')).toBe(1);
  });
});
