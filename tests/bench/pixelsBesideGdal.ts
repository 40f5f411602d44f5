/**
 * Are the values of every pixel those that GDAL gives (in true units, NaN where missing)? In: a picture. Out: a word for
 * the table. Compared as float32, the precision of cells; alpha bands and masks count as missing pixels in both.
 */
import { spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { basename, join } from 'node:path';
import { describeRaster, type RasterReadOptions } from '../../server/importers/raster/describeRaster.ts';
import { readPixels } from '../core/importers/readPixels.ts';

/** Larger pictures are measured only: both readings lie in memory as doubles. */
const mostPixels = 20e6;

const script = `
import sys, numpy as np
from osgeo import gdal
gdal.UseExceptions()
picture = gdal.Open(sys.argv[1])
out = open(sys.argv[2], 'wb')
last = picture.GetRasterBand(picture.RasterCount)
# GDAL makes a mask of an alpha band in pictures of two or four bands only.
clear = last.ReadAsArray() == 0 if last.GetColorInterpretation() == gdal.GCI_AlphaBand else False
for index in map(int, sys.argv[3].split(',')):
    band = picture.GetRasterBand(index)
    values = band.ReadAsArray().astype('f8')
    missing = band.GetMaskBand().ReadAsArray() == 0
    scale, offset = band.GetScale(), band.GetOffset()
    values = values * (1 if scale is None else scale) + (0 if offset is None else offset)
    values[missing | clear | ~np.isfinite(values)] = np.nan
    values.tofile(out)
`;

/** With the world file that lies beside a picture. */
export function pictureOptions(path: string): RasterReadOptions {
  const world = path.replace(/\.tiff?$/i, '.tfw');
  return { fileName: basename(path), worldFileText: existsSync(world) ? readFileSync(world, 'utf8') : null };
}

export async function pixelsBesideGdal(path: string): Promise<string> {
  const understood = await describeRaster(path, pictureOptions(path));
  const pixels = understood.width * understood.height;
  if (pixels > mostPixels) return 'not compared';
  const folder = mkdtempSync(join(tmpdir(), 'pixels-'));
  try {
    const file = join(folder, 'pixels.bin');
    const { status, stderr } = spawnSync('/usr/bin/python3', ['-c', script, path, file, understood.bands.map(({ index }) => index).join()], { encoding: 'utf8' });
    if (status !== 0) return `GDAL: ${stderr.trim().split('\n').at(-1) ?? 'failed'}`;
    const bytes = readFileSync(file);
    const own = await readPixels(path, understood.bands.map(({ index }) => index), understood.alphaBand);
    const differing = understood.bands.reduce((sum, { scale, offset, noData, type }, band) => {
      const theirs = new Float64Array(bytes.buffer, bytes.byteOffset + 8 * band * pixels, pixels);
      const mark = noData !== null && type === 'float 32-bit' ? Math.fround(noData) : noData;
      return sum + own[band]!.reduce((count, stored, pixel) => {
        const value = stored === mark || !Number.isFinite(stored) || Number.isNaN(own[0]![pixel]!) ? NaN : stored * scale + offset;
        return count + (Object.is(Math.fround(value) + 0, Math.fround(theirs[pixel]!) + 0) ? 0 : 1);
      }, 0);
    }, 0);
    return differing === 0 ? 'equal' : `${differing} of ${pixels * understood.bands.length} differ`;
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
