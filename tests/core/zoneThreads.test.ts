import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import type { FeatureCollection, MultiPolygon } from 'geojson';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { makeZoning, prepareZoning, zonesOfEveryNumber } from '../../shared/analysis/zoning.ts';
import { concludeEvidence } from '../../shared/analysis/zoningEvidence.ts';
import { decideZones, drawZones, figuresOfZones, zoningRecord } from '../../shared/analysis/zoningFinish.ts';
import type { MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import { BESIDE_TASKS, doBeside, type BesideOutcome } from '../../server/cli/zoneBeside.ts';
import { runZoneCommand } from '../../server/cli/zoneCommand.ts';
import { geoPackageOf } from '../../server/exporters/features/geoPackage.ts';
import { readRasterOntoGrids, readSharedRows, type PictureSums } from '../../server/importers/raster/readRasterOntoGrids.ts';
import { layersOf } from '../bench/judgedPanel.ts';
import { writeCase, type WrittenCase } from '../bench/simulatedFiles.ts';

/** Two threads share the work of the zoning command; whoever does which part, the zones are those of one thread. */

let folder = '';
let written: WrittenCase;

beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'zone-threads-'));
  written = writeCase(folder, { name: 'shared', areaHa: 3, pixelM: 0.25, seed: 6, k: 3 });
});

afterAll(() => rmSync(folder, { recursive: true, force: true }));

describe('a picture whose rows two threads take', () => {
  const counter = (value: number) => Int32Array.of(value);
  const read = () => {
    const options = { fileName: 'vigour.tif', estateLonLat: null };
    const request = { quantity: { kind: 'index', index: 'ndvi', bands: { red: 1, nir: 2 } }, grids: [written.block.grid] } as const;
    const path = join(folder, 'vigour.tif');
    return {
      alone: () => readRasterOntoGrids(path, options, request),
      rows: (taken: Int32Array) => readSharedRows(path, options, { ...request, taken }),
      with: (taken: Int32Array, others: () => Promise<PictureSums>) => readRasterOntoGrids(path, options, { ...request, shared: { taken, others } }),
    };
  };

  it('has the same cells to the bit as one read alone, however the rows fall', async () => {
    const picture = read();
    const [alone] = await picture.alone();
    const taken = counter(0);
    const away = picture.rows(taken);
    const [together] = await picture.with(taken, () => away);
    expect(taken[0]).toBeGreaterThan(4);
    expect((await away)!.some((sums) => sums.some((sum) => sum > 0))).toBe(true);
    expect(together!.cells).toEqual(alone!.cells);
    expect(together!.covered).toEqual(alone!.covered);
  });

  it('needs the rows of the other: without them cells are missing', async () => {
    const [half] = await read().with(counter(2), async () => null);
    expect(half!.cells.filter(Number.isNaN).length).toBeGreaterThan((await read().alone())[0]!.cells.filter(Number.isNaN).length);
  });
});

describe('the work beside the zones', () => {
  it('gives the same record whichever thread does which task', () => {
    const { grid, truth } = written.block;
    const input = { grid, layers: [...layersOf(written.block), { id: 'soil', type: 'soil', role: 'context', kind: 'number', cells: Float32Array.from(truth), weight: null } as const] };
    const whole = JSON.stringify(makeZoning(input));
    for (let first = 0; first <= BESIDE_TASKS.length; first++) {
      const ground = prepareZoning(input);
      // One thread has all tasks from the given one on, the other those before it.
      const there = doBeside({ work: structuredClone(ground.beside), taken: Int32Array.of(first) }).outcome;
      const here = Object.assign({}, ...BESIDE_TASKS.slice(0, first).map(({ of }) => of(ground.beside))) as Partial<BesideOutcome>;
      expect(Object.keys(there)).toHaveLength(BESIDE_TASKS.length - first);
      const { edges, ...parts } = { ...here, ...there } as BesideOutcome;
      const found = { made: zonesOfEveryNumber(ground), edges, evidence: concludeEvidence(ground.beside.evidence, parts) };
      const decided = decideZones(ground, found);
      const [figures, drawn] = [figuresOfZones(ground, decided), drawZones(structuredClone(decided.toDraw))];
      expect(JSON.stringify(zoningRecord(ground, found, { decided, drawn, figures }))).toBe(whole);
    }
  });
});

describe('the built program, which runs in two threads', () => {
  it('writes the bytes that one thread writes', { timeout: 120_000 }, async () => {
    const at = (name: string) => join(folder, name);
    const args = (out: string) => ['--block', at('block.geojson'), '--layer', `ndvi=${at('vigour.tif')}#red=1,nir=2`, '--layer', `conductivity=${at('ec.csv')}#value=ec_deep_mS_m`, '--layer', `elevation=${at('dem.tif')}`, '--readings', at('samples.csv'), '--out', at(out)];
    expect(await runZoneCommand(args('one.geojson'))).toMatchObject({ exitCode: 0 });
    const program = resolve(import.meta.dirname, '../../scripts/zone.mjs');
    for (const out of ['two.geojson', 'again.geojson']) {
      const { status, stderr } = spawnSync(process.execPath, [program, ...args(out)], { encoding: 'utf8' });
      expect(status, stderr).toBe(0);
      expect(readFileSync(at(out), 'utf8')).toBe(readFileSync(at('one.geojson'), 'utf8'));
    }
    // A GeoPackage is read in WebAssembly that lies beside its library.
    const [block] = (JSON.parse(readFileSync(at('block.geojson'), 'utf8')) as FeatureCollection<MultiPolygon>).features;
    const feature = { values: ['Home'], shape: { kind: 'polygons', polygonsLonLat: block!.geometry.coordinates as unknown as MultiPolygonLonLat } } as const;
    writeFileSync(at('block.gpkg'), await geoPackageOf([{ name: 'block', title: 'Block', fields: [{ name: 'name', type: 'text' }], features: [feature], madeAt: new Date(0) }]));
    const { status, stderr } = spawnSync(process.execPath, [program, ...args('three.geojson').map((word) => word.replace(/block\.geojson$/, 'block.gpkg'))], { encoding: 'utf8' });
    expect(status, stderr).toBe(0);
    expect(readFileSync(at('three.geojson'), 'utf8')).toBe(readFileSync(at('one.geojson'), 'utf8'));
  });
});
