/**
 * Seconds and memory of reading pictures onto a grid, a picture and a process each, beside GDAL reading the same bands whole
 * (python3-gdal, one thread), both without the start of their programs; runs interleaved, medians, and their ratio. Pictures: every TIFF of a folder, or the encodings
 * that gdal_translate makes here of a generated one; `pixels` says whether every value is the one that GDAL reads. Small
 * pictures measure little but opening them.
 */
import { spawnSync } from 'node:child_process';
import { mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { basename, join } from 'node:path';
import { pixelsBesideGdal } from './pixelsBesideGdal.ts';
import { measuredRun, readByGdal, type Run } from './readByGdal.ts';
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
  'cloud-optimised, deflate, predictor 2': ['-of', 'COG', '-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=2'],
};

export async function benchImport(options: ImportBenchOptions): Promise<unknown[]> {
  const folder = mkdtempSync(join(tmpdir(), 'import-bench-'));
  try {
    const pictures = options.dataFolder === null ? generated(folder) : readdirSync(options.dataFolder).filter((name) => /\.tiff?$/i.test(name)).map((name) => ({ name, path: join(options.dataFolder!, name) }));
    const rows: unknown[] = [];
    for (const { name, path } of pictures) rows.push(await row(name, path, options));
    return rows;
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

async function row(name: string, path: string, { runs, cellSizeM }: ImportBenchOptions): Promise<unknown> {
  const [own, gdal]: [Run[], Run[]] = [[], []];
  const picture = basename(name);
  for (let run = 0; run < runs; run++) {
    const read = measuredRun(process.execPath, ['--import', 'tsx', join(import.meta.dirname, 'readOnePicture.ts'), path, String(cellSizeM)]);
    if (typeof read === 'string') return { picture, refused: read, pixels: await pixelsBesideGdal(path) };
    own.push(read);
    const beside = readByGdal(path);
    if (typeof beside !== 'string') gdal.push(beside);
  }
  const of = (list: readonly Run[], part: (run: Run) => number) => (list.length === 0 ? null : median(list.map(part)));
  const [seconds, gdalSeconds] = [of(own, (run) => run.seconds), of(gdal, (run) => run.seconds)];
  return {
    picture, seconds, gdalSeconds, ratioToGdal: seconds === null || gdalSeconds === null ? null : seconds / gdalSeconds,
    peakMb: of(own, (run) => run.peakMb), overBaseMb: of(own, (run) => run.peakMb - run.baseMb), gdalPeakMb: of(gdal, (run) => run.peakMb),
    pixels: await pixelsBesideGdal(path),
  };
}

function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[sorted.length >> 1]!;
}
