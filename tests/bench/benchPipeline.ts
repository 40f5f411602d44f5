/**
 * Seconds and memory of the whole zoning program, cold start included, on generated files or on a folder of given ones; beside
 * it, when a command is given, the same files through another program, runs interleaved, as ratios of medians.
 */

import { spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { basename, join, resolve } from 'node:path';
import { adjustedRandIndex } from '../../shared/analysis/agreement.ts';
import { cellCentre } from '../../shared/analysis/grid.ts';
import { fromUtm } from '../../shared/geo/utm.ts';
import { booleanPointInPolygon } from '@turf/turf';
import type { FeatureCollection, MultiPolygon } from 'geojson';
import type { SimulatedBlock } from './simulatedBlock.ts';
import { writeCase, type FileCase } from './simulatedFiles.ts';

export interface PipelineOptions {
  readonly runs: number;
  readonly cellSizeM: number;
  /** Folder with block.geojson, vigour_rednir.tif, ec.csv, dem.tif, soil.zip and samples.csv, instead of generated files. */
  readonly dataFolder: string | null;
  /** Another program on the same files; {data}, {out} and {cell} are filled in. */
  readonly against: string | null;
}

const program = resolve(import.meta.dirname, '../../scripts/zone.mjs');
const generated: readonly FileCase[] = [
  { name: '20 ha, 0.25 m pixels', areaHa: 20, pixelM: 0.25, seed: 7, k: 4 },
  { name: '100 ha, 0.2 m pixels', areaHa: 100, pixelM: 0.2, seed: 3, k: 5 },
];

type Zones = FeatureCollection<MultiPolygon, { zone: number }>;

interface Measured {
  readonly wallSeconds: number;
  readonly peakMemoryMb: number | null;
}

export function benchPipeline(options: PipelineOptions): unknown[] {
  if (options.dataFolder !== null) {
    const { zones: _drawn, ...measured } = measureFolder(basename(options.dataFolder), options.dataFolder, options);
    return [measured];
  }
  return generated.map((wanted) => {
    const folder = mkdtempSync(join(tmpdir(), 'zoning-bench-'));
    try {
      const { block, megapixels } = writeCase(folder, wanted);
      const { zones, ...measured } = measureFolder(wanted.name, folder, options);
      return { ...measured, megapixels, zonesTrue: block.k, agreement: agreementWith(block, zones) };
    } finally {
      rmSync(folder, { recursive: true, force: true });
    }
  });
}

function measureFolder(name: string, folder: string, { runs, cellSizeM, against }: PipelineOptions) {
  const out = mkdtempSync(join(tmpdir(), 'zoning-out-'));
  const [ours, theirs]: [Measured[], Measured[]] = [[], []];
  runZone(folder, out, cellSizeM);
  for (let run = 0; run < runs; run++) {
    ours.push(runZone(folder, out, cellSizeM));
    if (against !== null) theirs.push(runOther(against, { data: folder, out, cell: String(cellSizeM) }));
  }
  const report = JSON.parse(readFileSync(join(out, 'report.json'), 'utf8')) as Record<string, unknown> & { secondsPerStage: Record<string, number>; peakMemoryMb: number };
  const zones = JSON.parse(readFileSync(join(out, 'zones.geojson'), 'utf8')) as Zones;
  rmSync(out, { recursive: true, force: true });
  const decoding = Object.entries(report.secondsPerStage).filter(([stage]) => stage.startsWith('layer ')).reduce((sum, [, seconds]) => sum + seconds, 0);
  return {
    name,
    cellSizeM,
    wallSeconds: median(ours.map(({ wallSeconds }) => wallSeconds)),
    peakMemoryMb: median(ours.map(({ peakMemoryMb }) => peakMemoryMb!)),
    secondsPerStage: report.secondsPerStage,
    shareOfReadingLayers: decoding / Object.values(report.secondsPerStage).reduce((sum, seconds) => sum + seconds, 0),
    verdict: (report.verdict as { verdict: string }).verdict,
    zonesAdvised: report.zonesAdvised,
    zones,
    ...(theirs.length === 0 ? {} : { otherWallSeconds: median(theirs.map(({ wallSeconds }) => wallSeconds)), ratio: median(ours.map(({ wallSeconds }) => wallSeconds)) / median(theirs.map(({ wallSeconds }) => wallSeconds)) }),
  };
}

function runZone(folder: string, out: string, cellSizeM: number): Measured {
  const given = (names: readonly string[]) => names.map((name) => join(folder, name)).find(existsSync);
  const layers = [
    ['ndvi', given(['vigour.tif', 'vigour_rednir.tif']), '#red=1,nir=2'],
    ['conductivity', given(['ec.csv']), '#value=ec_deep_mS_m'],
    ['elevation', given(['dem.tif']), ''],
    ['soil', given(['soil.geojson', 'soil.zip']), '#field=AWC_MM'],
  ].flatMap(([type, path, rest]) => (path === undefined ? [] : ['--layer', `${type}=${path}${rest}`]));
  const readings = given(['samples.csv']);
  const args = ['--block', join(folder, 'block.geojson'), ...layers, ...(readings === undefined ? [] : ['--readings', readings]), '--cell', String(cellSizeM), '--out', join(out, 'zones.geojson'), '--report', join(out, 'report.json')];
  const measured = timed(process.execPath, [program, ...args]);
  const { peakMemoryMb } = JSON.parse(readFileSync(join(out, 'report.json'), 'utf8')) as { peakMemoryMb: number };
  return { ...measured, peakMemoryMb };
}

function runOther(template: string, fill: Record<string, string>): Measured {
  const [command, ...args] = template.split(' ').map((word) => word.replace(/\{(\w+)\}/g, (_, name: string) => fill[name] ?? ''));
  return timed(command!, args);
}

/** Single-threaded arithmetic for libraries that would spread over all cores by themselves. */
function timed(command: string, args: readonly string[]): Measured {
  const start = performance.now();
  const { status, stderr } = spawnSync(command, args, { encoding: 'utf8', env: { ...process.env, OMP_NUM_THREADS: '1', OPENBLAS_NUM_THREADS: '1' } });
  if (status !== 0) throw new Error(`${command} ended with ${status}: ${stderr.slice(-500)}`);
  return { wallSeconds: (performance.now() - start) / 1000, peakMemoryMb: null };
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
