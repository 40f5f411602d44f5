import { bbox, bboxClip } from '@turf/turf';
import { existsSync, mkdirSync, mkdtempSync, readFileSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { FeatureCollection, MultiPolygon, Polygon } from 'geojson';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { signedArea } from '../../shared/geo/rings.ts';
import { readArguments } from '../../server/cli/zoneArguments.ts';
import { runZoneCommand, type CommandOutcome } from '../../server/cli/zoneCommand.ts';
import { groundFit } from '../bench/groundFit.ts';
import { writeCase, type WrittenCase } from '../bench/simulatedFiles.ts';

let folder = '';
let written: WrittenCase;

beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'zone-command-'));
  written = writeCase(folder, { name: 'small', areaHa: 2, pixelM: 0.5, seed: 4, k: 3 });
});

afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** Names of files stand for files in the folder of the test. */
function zone(...args: readonly string[]): Promise<CommandOutcome> {
  return runZoneCommand(args.map((arg) => arg.replace(/^(\w+=)?(\w+(\/\w+)?\.(geojson|tif|csv|json))/, (_, type: string | undefined, name: string) => `${type ?? ''}${join(folder, name)}`)));
}

const usual = ['--block', 'block.geojson', '--layer', 'ndvi=vigour.tif#red=1,nir=2', '--layer', 'conductivity=ec.csv#value=ec_deep_mS_m', '--layer', 'elevation=dem.tif', '--layer', 'soil=soil.geojson#field=AWC_MM', '--cell', '3', '--seed', '2'];

describe('the zoning command', () => {
  it('says of ground under one hectare, and of terrain alone, that the layers cannot tell', async () => {
    const small = join(folder, 'tiny');
    mkdirSync(small);
    writeCase(small, { name: 'tiny', areaHa: 0.4, pixelM: 0.5, seed: 5, k: 2 });
    const tiny = await zone('--block', 'tiny/block.geojson', '--layer', 'ndvi=tiny/vigour.tif#red=1,nir=2', '--out', 'tiny/zones.geojson');
    expect(tiny).toMatchObject({ exitCode: 0, line: expect.stringMatching(/^\d zones? on 0\.40 ha; too small to judge from layers alone, advised \d\. Written: /) });
    const terrain = await zone('--block', 'block.geojson', '--layer', 'elevation=dem.tif#weight=1', '--out', 'tiny/zones.geojson');
    expect(terrain).toMatchObject({ exitCode: 0, line: expect.stringMatching(/^\d zones? on 2\.00 ha; no measured layer to judge from, advised \d\. Written: /) });
  });

  it('writes zones for a map and a report, the same bytes for the same seed', async () => {
    const first = await zone(...usual, '--readings', 'samples.csv', '--out', 'zones.geojson', '--report', 'report.json');
    expect(first).toMatchObject({ exitCode: 0, line: expect.stringMatching(/zones on 2\.00 ha; verdict \w+, advised \d/) });
    const zones = JSON.parse(readFileSync(join(folder, 'zones.geojson'), 'utf8')) as FeatureCollection<MultiPolygon, { zone: number; area_ha: number }>;
    expect(zones.features.map(({ properties }) => properties.zone)).toEqual(zones.features.map((_, at) => at + 1));
    expect(zones.features.reduce((sum, { properties }) => sum + properties.area_ha, 0)).toBeCloseTo(2, 2);
    // Lines 0.5 m apart across both: no ground twice, and less than a thousandth of two hectares missing or outside.
    const fit = groundFit(JSON.parse(readFileSync(join(folder, 'block.geojson'), 'utf8')), zones);
    expect(fit.overlapM2).toBeLessThan(0.01);
    expect(fit.gapM2 + fit.outsideM2).toBeLessThan(20);
    // RFC 7946: closed rings, outer ones counter-clockwise, degrees.
    for (const { geometry } of zones.features) {
      for (const [outer, ...holes] of geometry.coordinates) {
        expect(outer![0]).toEqual(outer!.at(-1));
        expect(signedArea(outer as [number, number][])).toBeGreaterThan(0);
        for (const hole of holes) expect(signedArea(hole as [number, number][])).toBeLessThan(0);
        for (const [lon, lat] of outer!) expect(Math.abs(lon!) <= 180 && Math.abs(lat!) <= 90).toBe(true);
      }
    }
    const report = JSON.parse(readFileSync(join(folder, 'report.json'), 'utf8'));
    expect(report.evidence.map(({ k }: { k: number }) => k)).toEqual([1, 2, 3, 4, 5, 6]);
    expect(report.advisedWeights.map(({ id, weight }: { id: string; weight: number }) => [id, weight])).toEqual([['ndvi', 1], ['conductivity', 1], ['elevation', 0], ['soil', 0]]);
    expect(report.zones).toHaveLength(report.zonesChosen);
    expect(report.secondsPerStage).toMatchObject({ block: expect.any(Number), 'layer ndvi': expect.any(Number), clusters: expect.any(Number), polygons: expect.any(Number) });
    expect(report.peakMemoryMb).toBeGreaterThan(20);
    expect(report.fruit.tests[0].measure).toBe('brix');
    expect(Math.abs(report.zonesAdvised - written.block.k)).toBeLessThanOrEqual(1);
    const before = readFileSync(join(folder, 'zones.geojson'), 'utf8');
    await zone(...usual, '--readings', 'samples.csv', '--out', 'zones.geojson');
    expect(readFileSync(join(folder, 'zones.geojson'), 'utf8')).toBe(before);
  });

  it('makes the number of zones that is asked for, with the weights that are given', async () => {
    const { exitCode } = await zone('--block', 'block.geojson', '--layer', 'ndvi=vigour.tif#red=1,nir=2', '--layer', 'elevation=dem.tif#weight=0.5', '--layer', 'slope=dem.tif', '--zones', '2', '--cell', '4', '--min-patch-ha', '0.02', '--out', 'two.geojson', '--report', 'two.json');
    expect(exitCode).toBe(0);
    const report = JSON.parse(readFileSync(join(folder, 'two.json'), 'utf8'));
    expect(report.zonesChosen).toBe(2);
    expect(report.weights).toEqual([{ layerId: 'ndvi', weight: 1 }, { layerId: 'elevation', weight: 0.5 }, { layerId: 'slope', weight: 0 }]);
  });

  it('takes parts that touch as one block', async () => {
    const { features } = JSON.parse(readFileSync(join(folder, 'block.geojson'), 'utf8')) as FeatureCollection<Polygon>;
    const [west, south, east, north] = bbox(features[0]!) as [number, number, number, number];
    const middle = (west + east) / 2;
    const parts = ([[west, south, middle, north], [middle, south, east, north]] as const).map((box) => bboxClip(features[0]!, [...box]));
    writeFileSync(join(folder, 'parts.geojson'), JSON.stringify({ type: 'FeatureCollection', features: parts }));
    const made = await zone('--block', 'parts.geojson', '--layer', 'ndvi=vigour.tif#red=1,nir=2', '--zones', '2', '--cell', '4', '--out', 'partsZones.geojson');
    expect(made).toMatchObject({ exitCode: 0, line: expect.stringContaining('2 zones on 2.00 ha') });
  });

  it('spreads points by inverse distance, or by kriging where it is asked for', async () => {
    const run = async (surface: string) => {
      const args = ['--block', 'block.geojson', '--layer', `conductivity=ec.csv#value=ec_deep_mS_m${surface}`, '--zones', '3', '--cell', '4', '--out', 'points.geojson'];
      expect((await zone(...args)).exitCode).toBe(0);
      return readFileSync(join(folder, 'points.geojson'), 'utf8');
    };
    expect(await run(',surface=distance')).toBe(await run(''));
    expect(await run(',surface=kriging')).not.toBe(await run(''));
  });

  it.each<[string, readonly string[], RegExp]>([
    ['an unknown surface', ['--block', 'block.geojson', '--layer', 'conductivity=ec.csv#value=ec_deep_mS_m,surface=spline', '--out', 'x.geojson'], /surface=spline cannot be used; give distance or kriging/],
    ['no block', ['--layer', 'ndvi=vigour.tif#red=1,nir=2', '--out', 'x.geojson'], /--block is missing/],
    ['an unknown option', [...usual, '--colour', 'red', '--out', 'x.geojson'], /colour/],
    ['a file that is not there', ['--block', 'block.geojson', '--layer', 'vigour=gone.tif', '--out', 'x.geojson'], /gone\.tif does not exist/],
    ['two bands without saying which', ['--block', 'block.geojson', '--layer', 'vigour=vigour.tif', '--out', 'x.geojson'], /2 bands; say which with #band=1/],
    ['a table without saying which column', ['--block', 'block.geojson', '--layer', 'conductivity=ec.csv', '--out', 'x.geojson'], /give #value= one of .*ec_deep_mS_m/],
    ['a field that is not there', ['--block', 'block.geojson', '--layer', 'soil=soil.geojson#field=CLAY', '--out', 'x.geojson'], /no field "CLAY".*AWC_MM/],
    ['a picture of digital numbers taken as an index', ['--block', 'block.geojson', '--layer', 'vigour=vigour.tif#band=1', '--out', 'x.geojson'], /outside -1 to 60; check band/],
    ['something that is no picture', ['--block', 'block.geojson', '--layer', 'vigour=broken.tif', '--out', 'x.geojson'], /broken\.tif/],
    ['a picture that lies elsewhere', ['--block', 'far.geojson', '--layer', 'ndvi=vigour.tif#red=1,nir=2', '--out', 'x.geojson'], /does not cover the block: it lies .* km away/],
    ['an outline that crosses itself', ['--block', 'bow.geojson', '--layer', 'ndvi=vigour.tif#red=1,nir=2', '--out', 'x.geojson'], /cross/],
    ['a folder that is not there', [...usual, '--out', 'nowhere/x.geojson'], /nowhere does not exist/],
    ['a result that is a folder', [...usual, '--out', 'folder.geojson'], /folder\.geojson is a folder/],
    ['a result in place of what was given', [...usual, '--out', 'block.geojson'], /--out would write over the file given with --block/],
    ['a report in place of a layer', [...usual, '--out', 'x.geojson', '--report', 'dem.tif'], /--report would write over the file given with --layer elevation/],
    ['one file for both results', [...usual, '--out', 'x.geojson', '--report', 'x.geojson'], /name the same file/],
    ['a survey in another unit than it says', ['--block', 'block.geojson', '--layer', 'conductivity=ec.csv#value=ec_deep_mS_m,unit=dS/m', '--out', 'x.geojson'], /values for layer "conductivity" lie outside 0 to 2000 mS\/m; check the column and its unit/],
    ['seven zones', [...usual, '--zones', '7', '--out', 'x.geojson'], /--zones 7 cannot be used/],
  ])('ends with one line and writes nothing for %s', async (_name, args, sentence) => {
    mkdirSync(join(folder, 'folder.geojson'), { recursive: true });
    writeFileSync(join(folder, 'broken.tif'), 'II*\0 this is no picture');
    const square = (west: number, corners: number[][]) => JSON.stringify({ type: 'Polygon', coordinates: [corners.map(([x, y]) => [west + x! / 1000, 45 + y! / 1000])] });
    writeFileSync(join(folder, 'far.geojson'), square(9, [[0, 0], [2, 0], [2, 2], [0, 2], [0, 0]]));
    writeFileSync(join(folder, 'bow.geojson'), square(3, [[0, 0], [2, 2], [2, 0], [0, 2], [0, 0]]));
    const before = readdirSync(folder);
    const { exitCode, line } = await zone(...args);
    expect(line).toMatch(sentence);
    expect(line).not.toContain('\n');
    expect(exitCode).toBe(2);
    expect(readdirSync(folder)).toEqual(before);
    expect(existsSync(join(folder, 'x.geojson'))).toBe(false);
  });
});

describe('help of the zoning command', () => {
  it.each([['--help'], ['-h'], ['--zones', '3', '--help']])('is printed for %s and names every option', async (...args) => {
    const { exitCode, line } = await runZoneCommand(args);
    expect(exitCode).toBe(0);
    for (const option of ['--block', '--layer', '--out', '--report', '--readings', '--zones', '--layer-weights', '--cell', '--min-patch-ha', '--smooth', '--standardise', '--components', '--seed']) expect(line).toContain(`  ${option} `.trimEnd());
    for (const type of ['vigour', 'conductivity', 'soil', 'elevation', 'ndvi', 'msavi2']) expect(line).toContain(type);
  });

  it('is pointed to where something is missing', async () => {
    expect(await runZoneCommand([])).toEqual({ exitCode: 2, line: '--block is missing. npm run zone -- --help lists all options.' });
  });
});

describe('arguments of the zoning command', () => {
  const read = (...args: string[]) => readArguments(['--block', 'b.geojson', '--out', 'z.geojson', ...args]);

  it('read a layer with type, file and options', () => {
    expect(read('--layer', 'gndvi=a b.tif#green=3,nir=4,nodata=0').layers).toEqual([
      { id: 'gndvi', type: 'vigour', purpose: 'vigour', terrain: null, index: 'gndvi', path: 'a b.tif', bands: { green: 3, nir: 4 }, options: { green: '3', nir: '4', nodata: '0' } },
    ]);
  });

  it('take an index without bands as a picture that holds the index already', () => {
    expect(read('--layer', 'ndvi=ndvi.tif').layers[0]).toMatchObject({ type: 'vigour', index: null, bands: {} });
  });

  it('keep a # that belongs to the name of the file', () => {
    expect(read('--layer', 'vigour=block #3.tif').layers[0]).toMatchObject({ path: 'block #3.tif', options: {} });
    expect(read('--layer', 'vigour=block #3.tif#band=2').layers[0]).toMatchObject({ path: 'block #3.tif', options: { band: '2' } });
  });

  it('tell two layers of one type apart', () => {
    expect(read('--layer', 'vigour=may.tif', '--layer', 'vigour=june.tif').layers.map(({ id }) => id)).toEqual(['vigour', 'vigour-2']);
  });

  it('have usual values for what is left out', () => {
    expect(read('--layer', 'vigour=a.tif')).toMatchObject({ zones: 'advise', layerWeights: 'advise', cellSizeM: 2, smallestPatchHa: null, smoothingM: 3, seed: 1, reportPath: null, readingsPath: null });
  });

  it.each([
    [['--layer', 'colour=a.tif'], /"colour" is no layer type; use one of vigour, conductivity/],
    [['--layer', 'vigour'], /--layer vigour: give type and file, as in vigour=ndvi\.tif/],
    [['--layer', 'ndvi=a.tif#red=2,nir=2'], /red and nir cannot be the same band/],
    [['--layer', 'vigour='], /file is missing/],
    [['--layer', 'vigour=a.tif#shade=2'], /"shade=2" is no option/],
    [['--layer', 'soil=a.zip#red=1'], /bands make a vegetation index/],
    [['--layer', 'vigour=a.tif', '--cell', '0'], /--cell 0 cannot be used; give a number from 0\.25 to 100/],
    [['--layer', 'vigour=a.tif', '--cell', 'two'], /--cell two cannot be used/],
    [['--layer', 'vigour=a.tif', '--layer-weights', 'best'], /advise or equal/],
    [['--layer', 'vigour=a.tif', '--seed', '1.5'], /whole number/],
    [[], /--layer is missing/],
  ])('refuse %j', (args, message) => {
    expect(() => read(...args)).toThrow(message);
  });
});
