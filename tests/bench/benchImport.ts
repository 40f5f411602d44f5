/**
 * Seconds and memory of reading pictures onto a grid, a picture and a process each, beside GDAL reading the same bands whole
 * (python3-gdal, one thread); runs interleaved, medians, and their ratio. Pictures: every TIFF of a folder, or the encodings
 * that gdal_translate makes here of a generated one. Small pictures measure little but the start of both programs.
 */
import { spawnSync } from 'node:child_process';
import { mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { basename, join } from 'node:path';
import { geoTiffBytes } from '../../server/exporters/geoTiffBytes.ts';

export interface ImportBenchOptions {
  readonly runs: number;
  readonly dataFolder: string | null;
  readonly cellSizeM: number;
}

const sidePixels = 4000;
const encodings: Readonly<Record<string, readonly string[]>> = {
  'deflate, predictor 2, tiles': ['-co', 'TILED=YES', '-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=2'],
  'LZW, predictor 2, strips': ['-co', 'COMPRESS=LZW', '-co', 'PREDICTOR=2'],
  'float32, deflate, predictor 3': ['-ot', 'Float32', '-co', 'TILED=YES', '-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=3'],
  'deflate, predictor 2, bands apart': ['-co', 'TILED=YES', '-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=2', '-co', 'INTERLEAVE=BAND'],
  'uncompressed, tiles': ['-co', 'TILED=YES'],
};

export function benchImport(options: ImportBenchOptions): unknown[] {
  const folder = mkdtempSync(join(tmpdir(), 'import-bench-'));
  try {
    const pictures = options.dataFolder === null ? generated(folder) : readdirSync(options.dataFolder).filter((name) => /\.tiff?$/i.test(name)).map((name) => ({ name, path: join(options.dataFolder!, name) }));
    return pictures.map(({ name, path }) => row(name, path, options));
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

/** Two bands of 16 bits with the texture of a canopy, in each encoding that GDAL can write here. */
function generated(folder: string): { name: string; path: string }[] {
  const bands = [0, 1].map((band) => Uint16Array.from({ length: sidePixels * sidePixels }, (_, pixel) => 1200 + 900 * band + 400 * Math.sin((pixel % sidePixels) / 6) + ((pixel * 2654435761) >>> 26)));
  const source = join(folder, 'source.tif');
  writeFileSync(source, geoTiffBytes({ width: sidePixels, height: sidePixels, bands, epsg: 32631, originX: 500_000, originY: 4_950_000, pixelSize: 0.2, noData: 0 }));
  return Object.entries(encodings).flatMap(([name, flags], at) => {
    const path = join(folder, `${at}.tif`);
    return spawnSync('gdal_translate', ['-q', ...flags, source, path]).status === 0 ? [{ name, path }] : [];
  });
}

interface Run {
  seconds: number;
  peakMb: number;
}

function row(name: string, path: string, { runs, cellSizeM }: ImportBenchOptions): unknown {
  const [own, gdal]: [Run[], Run[]] = [[], []];
  for (let run = 0; run < runs; run++) {
    const read = timed(process.execPath, ['--import', 'tsx', join(import.meta.dirname, 'readOnePicture.ts'), path, String(cellSizeM)]);
    if (typeof read === 'string') return { picture: basename(name), refused: read };
    own.push(read);
    const beside = timed('/usr/bin/python3', ['-c', `from osgeo import gdal; gdal.UseExceptions(); gdal.SetConfigOption('GDAL_NUM_THREADS', '1'); gdal.Open(${JSON.stringify(path)}).ReadAsArray()\nimport resource; print('{"peakMb": %f}' % (resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024))`]);
    if (typeof beside !== 'string') gdal.push(beside);
  }
  const seconds = median(own.map((run) => run.seconds));
  const gdalSeconds = gdal.length === 0 ? null : median(gdal.map((run) => run.seconds));
  return { picture: basename(name), seconds, peakMb: median(own.map((run) => run.peakMb)), gdalSeconds, gdalPeakMb: gdal.length === 0 ? null : median(gdal.map((run) => run.peakMb)), ratioToGdal: gdalSeconds === null ? null : seconds / gdalSeconds };
}

/** Wall seconds of a process and the highest resident set it says of itself; its complaint when it fails. */
function timed(command: string, args: readonly string[]): Run | string {
  const start = process.hrtime.bigint();
  const { status, stdout, stderr } = spawnSync(command, [...args], { encoding: 'utf8' });
  const seconds = Number(process.hrtime.bigint() - start) / 1e9;
  if (status !== 0) return stderr.trim().split('\n').at(-1) ?? 'it failed';
  return { seconds, ...(JSON.parse(stdout) as { peakMb: number }) };
}

function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[sorted.length >> 1]!;
}
