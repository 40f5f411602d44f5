/**
 * Seconds and memory of the whole zoning program, cold start included, on generated files or on a folder of given ones; beside
 * it, when commands are given, the same files through other programs, runs interleaved, as ratios of medians; and, where
 * python3 has GDAL, the seconds in which that decodes the largest picture, which nothing that reads it can beat. Memory is
 * the highest resident set that the system notes of their process. Zones are checked for gaps and overlaps the same way.
 */

import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { basename, join, resolve } from 'node:path';
import { adjustedRandIndex } from '../../shared/analysis/agreement.ts';
import { cellCentre } from '../../shared/analysis/grid.ts';
import { fromUtm } from '../../shared/geo/utm.ts';
import { booleanPointInPolygon } from '@turf/turf';
import type { FeatureCollection, MultiPolygon } from 'geojson';
import { groundFit } from './groundFit.ts';
import { readByGdal } from './readByGdal.ts';
import type { SimulatedBlock } from './simulatedBlock.ts';
import { writeCase, type FileCase } from './simulatedFiles.ts';

export interface PipelineOptions {
  readonly runs: number;
  readonly cellSizeM: number;
  /** Folder with block.geojson, vigour_rednir.tif, ec.csv, dem.tif, soil.zip and samples.csv, instead of generated files. */
  readonly dataFolder: string | null;
  /** Other programs on the same files, each leaving zones.geojson in {out}; {data}, {out} and {cell} are filled in. */
  readonly against: readonly string[];
}

const program = resolve(import.meta.dirname, '../../scripts/zone.mjs');
const generated: readonly FileCase[] = [
  { name: '20 ha, 0.25 m pixels', areaHa: 20, pixelM: 0.25, seed: 7, k: 4 },
  { name: '100 ha, 0.2 m pixels', areaHa: 100, pixelM: 0.2, seed: 3, k: 5 },
];

type Zones = FeatureCollection<MultiPolygon, { zone: number }>;

interface Measured {
  readonly wallSeconds: number;
  readonly peakMemoryMb: number;
}

export async function benchPipeline(options: PipelineOptions): Promise<unknown[]> {
  if (options.dataFolder !== null) {
    const { zones: _drawn, ...measured } = await measureFolder(basename(options.dataFolder), options.dataFolder, options);
    return [measured];
  }
  const rows: unknown[] = [];
  for (const wanted of generated) {
    const folder = mkdtempSync(join(tmpdir(), 'zoning-bench-'));
    try {
      const { block, megapixels } = writeCase(folder, wanted);
      const { zones, ...measured } = await measureFolder(wanted.name, folder, options);
      rows.push({ ...measured, megapixels, zonesTrue: block.k, agreement: agreementWith(block, zones) });
    } finally {
      rmSync(folder, { recursive: true, force: true });
    }
  }
  return rows;
}

async function measureFolder(name: string, folder: string, { runs, cellSizeM, against }: PipelineOptions) {
  const out = mkdtempSync(join(tmpdir(), 'zoning-out-'));
  const picture = pictureIn(folder);
  const floors: number[] = [];
  const ours: Measured[] = [];
  const others = against.map((template) => ({ template, runs: [] as Measured[], out: mkdtempSync(join(tmpdir(), 'zoning-other-')) }));
  await runZone(folder, out, cellSizeM);
  for (let run = 0; run < runs; run++) {
    ours.push(await runZone(folder, out, cellSizeM));
    const floor = picture === undefined ? 'no picture' : readByGdal(picture);
    if (typeof floor !== 'string') floors.push(floor.seconds);
    for (const other of others) other.runs.push(await runOther(other.template, { data: folder, out: other.out, cell: String(cellSizeM) }));
  }
  const block = readJson<Zones>(join(folder, 'block.geojson'));
  const wallSeconds = median(ours.map((one) => one.wallSeconds));
  const compared = others.map(({ template, runs: theirs, out: left }) => {
    const zones = join(left, 'zones.geojson');
    const seconds = median(theirs.map((one) => one.wallSeconds));
    return { command: template, wallSeconds: seconds, ratio: wallSeconds / seconds, peakMemoryMb: median(theirs.map((one) => one.peakMemoryMb)), ...(existsSync(zones) ? groundFit(block, readJson<Zones>(zones)) : {}) };
  });
  const report = readJson<Record<string, unknown> & { secondsPerStage: Record<string, number>; peakMemoryMb: number }>(join(out, 'report.json'));
  const zones = readJson<Zones>(join(out, 'zones.geojson'));
  for (const left of [out, ...others.map((other) => other.out)]) rmSync(left, { recursive: true, force: true });
  const decoding = Object.entries(report.secondsPerStage).filter(([stage]) => stage.startsWith('layer ')).reduce((sum, [, seconds]) => sum + seconds, 0);
  return {
    name,
    cellSizeM,
    wallSeconds,
    peakMemoryMb: median(ours.map((one) => one.peakMemoryMb)),
    ...groundFit(block, zones),
    secondsPerStage: report.secondsPerStage,
    shareOfReadingLayers: decoding / Object.values(report.secondsPerStage).reduce((sum, seconds) => sum + seconds, 0),
    ...(floors.length === 0 ? {} : { gdalDecodesInSeconds: median(floors), timesGdalDecoding: wallSeconds / median(floors) }),
    verdict: (report.verdict as { verdict: string }).verdict,
    zonesAdvised: report.zonesAdvised,
    zones,
    ...(compared.length === 0 ? {} : { against: compared }),
  };
}

const pictureIn = (folder: string) => ['vigour.tif', 'vigour_rednir.tif'].map((name) => join(folder, name)).find(existsSync);

function runZone(folder: string, out: string, cellSizeM: number): Promise<Measured> {
  const given = (names: readonly string[]) => names.map((name) => join(folder, name)).find(existsSync);
  const layers = [
    ['ndvi', pictureIn(folder), '#red=1,nir=2'],
    ['conductivity', given(['ec.csv']), '#value=ec_deep_mS_m'],
    ['elevation', given(['dem.tif']), ''],
    ['soil', given(['soil.geojson', 'soil.zip']), '#field=AWC_MM'],
  ].flatMap(([type, path, rest]) => (path === undefined ? [] : ['--layer', `${type}=${path}${rest}`]));
  const readings = given(['samples.csv']);
  const args = ['--block', join(folder, 'block.geojson'), ...layers, ...(readings === undefined ? [] : ['--readings', readings]), '--cell', String(cellSizeM), '--out', join(out, 'zones.geojson'), '--report', join(out, 'report.json')];
  return timed(process.execPath, [program, ...args]);
}

function runOther(template: string, fill: Record<string, string>): Promise<Measured> {
  const [command, ...args] = template.split(' ').map((word) => word.replace(/\{(\w+)\}/g, (_, name: string) => fill[name] ?? ''));
  return timed(command!, args);
}

/** Single-threaded arithmetic for libraries that would spread over all cores by themselves. */
async function timed(command: string, args: readonly string[]): Promise<Measured> {
  const start = performance.now();
  const child = spawn(command, args, { stdio: ['ignore', 'ignore', 'pipe'], env: { ...process.env, OMP_NUM_THREADS: '1', OPENBLAS_NUM_THREADS: '1' } });
  let said = '';
  let peakMemoryMb = 0;
  child.stderr.setEncoding('utf8').on('data', (text: string) => (said += text));
  const watch = setInterval(() => (peakMemoryMb = Math.max(peakMemoryMb, highestMb(child.pid!))), 20);
  const [status] = (await once(child, 'exit')) as [number];
  clearInterval(watch);
  if (status !== 0) throw new Error(`${command} ended with ${status}: ${said.slice(-500)}`);
  return { wallSeconds: (performance.now() - start) / 1000, peakMemoryMb };
}

/** The system's own high-water mark of a process; 0 when it has ended. */
function highestMb(processId: number): number {
  try {
    return Number(/VmHWM:\s+(\d+)/.exec(readFileSync(`/proc/${processId}/status`, 'utf8'))?.[1] ?? 0) / 1024;
  } catch {
    return 0;
  }
}

function readJson<Shape>(file: string): Shape {
  return JSON.parse(readFileSync(file, 'utf8')) as Shape;
}

/** Adjusted Rand index of the drawn zones with the truth, on some thousand cells. */
function agreementWith({ grid, truth }: SimulatedBlock, zones: Zones): number {
  const cells = Array.from(grid.inside.keys()).filter((cell) => grid.inside[cell] === 1 && cell % 37 === 0);
  const found = cells.map((cell) => zones.features.find((zone) => booleanPointInPolygon([...fromUtm(cellCentre(grid, cell), grid.epsg)], zone))?.properties.zone ?? 0);
  return adjustedRandIndex(cells.map((cell) => truth[cell]!), found);
}

function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return (sorted[Math.floor((sorted.length - 1) / 2)]! + sorted[Math.ceil((sorted.length - 1) / 2)]!) / 2;
}
