import { execFileSync } from 'node:child_process';
import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { describeRaster } from '../../../server/importers/raster/describeRaster.ts';
import { decodeLzw } from '../../../server/importers/raster/lzw.ts';
import { undoDifferences } from '../../../server/importers/raster/predictors.ts';
import { seededRandom } from '../../../shared/analysis/random.ts';
import { readPixels } from './readPixels.ts';
import { writeTiff, type TiffPlan } from './writeTiff.ts';

const fixture = (name: string): string => join(import.meta.dirname, '../../fixtures/rasters', name);
/** How many pixels differ, NaN being equal to NaN. */
function differing(found: readonly Float64Array[], wanted: readonly Float64Array[]): number {
  if (found.length !== wanted.length || found.some((band, i) => band.length !== wanted[i]!.length)) return Infinity;
  return found.reduce((total, band, i) => total + band.reduce((count, value, at) => count + (Object.is(value + 0, wanted[i]![at]! + 0) ? 0 : 1), 0), 0);
}

const sum = (values: Float64Array): number => values.reduce((total, value) => total + value, 0);

describe('encodings of one picture give the same numbers', () => {
  it('the plain file has the sums and pixels that GDAL 3.6.2 and numpy give', async () => {
    const [red, nir] = await readPixels(fixture('l7_red_nir.tif'), [1, 2]);
    expect([sum(red!), sum(nir!)]).toEqual([497119, 726177]);
    expect([red![46 * 104 + 52], nir![46 * 104 + 52], red![31 * 104 + 34], nir![31 * 104 + 34]]).toEqual([65, 75, 35, 83]);
  });

  it.each(['l7_lzw_p2_rows', 'l7_u16_zstd_p2_tiled', 'l7_lzma', 'l7_packbits_band', 'l7_u16_big_endian_p2_tiles16', 'l7_u16_bigtiff_big_endian'])('%s', async (name) => {
    expect(differing(await readPixels(fixture(`${name}.tif`), [1, 2]), await readPixels(fixture('l7_red_nir.tif'), [1, 2]))).toBe(0);
  });

  it.each(['dem_deflate_p3', 'dem_lzw_p3', 'dem_f64_zstd'])('%s', async (name) => {
    const [plain] = await readPixels(fixture('dem.tif'), [1]);
    expect(plain![46 * 104 + 52]).toBe(Math.fround(29.88002586364746));
    expect(differing(await readPixels(fixture(`${name}.tif`), [1]), [plain!])).toBe(0);
  });
});

describe('differences taken of whole numbers', () => {
  it.each([1, 2, 3, 5].flatMap((stride) => ([1, 2, 4, 8] as const).map((bytesPerSample) => [stride, bytesPerSample] as const)))('of %i bands and %i bytes are added up again, cut short or not', (stride, bytesPerSample) => {
    const random = seededRandom(stride * 10 + bytesPerSample);
    const samplesPerRow = 23 * stride;
    const bytes = Uint8Array.from({ length: (samplesPerRow * 7 - 1) * bytesPerSample }, () => Math.floor(random() * 256));
    const read = (from: Uint8Array) => Array.from({ length: from.length / bytesPerSample }, (_, at) => BigInt(`0x${Buffer.from(from.subarray(at * bytesPerSample, (at + 1) * bytesPerSample)).reverse().toString('hex')}`));
    const wanted = read(bytes);
    wanted.forEach((difference, at) => {
      if (at % samplesPerRow >= stride) wanted[at] = BigInt.asUintN(8 * bytesPerSample, difference + wanted[at - stride]!);
    });
    undoDifferences(bytes, { samplesPerRow, stride, bytesPerSample });
    expect(read(bytes)).toEqual(wanted);
  });
});

describe('differences of sixteen bits in rows that come out even', () => {
  it.each([1, 2, 3, 4])('of %i bands are added up again, in more than one piece', (stride) => {
    const random = seededRandom(stride);
    const samplesPerRow = 248 * stride;
    const samples = Uint16Array.from({ length: samplesPerRow * 400 }, () => Math.floor(random() * 65536));
    const wanted = samples.slice();
    for (let at = 0; at < wanted.length; at++) if (at % samplesPerRow >= stride) wanted[at] = wanted[at]! + wanted[at - stride]!;
    undoDifferences(new Uint8Array(samples.buffer), { samplesPerRow, stride, bytesPerSample: 2 });
    expect(samples).toEqual(wanted);
  });

  it('works on a row wider than a piece', () => {
    const samples = new Uint16Array(3 * 80_000).fill(1);
    undoDifferences(new Uint8Array(samples.buffer), { samplesPerRow: 80_000, stride: 1, bytesPerSample: 2 });
    expect([samples[0], samples[79_999], samples[80_000], samples[239_999]]).toEqual([1, 80_000 % 65536, 1, 80_000 % 65536]);
  });
});

describe('every number type, layout and byte order that can be written by hand', () => {
  const plans: [string, TiffPlan][] = (['u8', 'i8', 'u16', 'i16', 'u32', 'i32', 'f32', 'f64', 'u64'] as const).flatMap((type): [string, TiffPlan][] =>
    [false, true].flatMap((bigEndian): [string, TiffPlan][] => [
      [`${type} ${bigEndian ? 'big-endian' : 'little-endian'} strips`, { width: 37, height: 23, bands: 2, type, bigEndian, rowsPerStrip: 5 }],
      [`${type} ${bigEndian ? 'big-endian' : 'little-endian'} tiles, bands apart, packed`, { width: 37, height: 23, bands: 2, type, bigEndian, tile: 16, separate: true, compression: 8 }],
    ]),
  );

  it.each(plans)('%s', async (_, plan) => {
    const signed = plan.type === 'i8' || plan.type === 'i16' || plan.type === 'i32' || plan.type === 'f32' || plan.type === 'f64';
    const value = (col: number, row: number, band: number): number => (signed ? -1 : 1) * ((col + 3 * row + band) % 100) + (signed ? 1 : 0);
    const pixels = await readPixels(writeTiff({ ...plan, value }), [1, 2]);
    const wanted = [0, 1].map((band) => Float64Array.from({ length: 37 * 23 }, (__, i) => value(i % 37, Math.floor(i / 37), band)));
    expect(differing(pixels, wanted)).toBe(0);
  });

  it('reads one uncompressed strip of any height in slices', async () => {
    const [band] = await readPixels(writeTiff({ width: 1500, height: 900, value: (col, row) => (col * 7 + row * 13) % 60000 }), [1]);
    expect(band!.every((value, i) => value === ((i % 1500) * 7 + Math.floor(i / 1500) * 13) % 60000)).toBe(true);
  });

  it('takes the last band as a mask when a person says that it is one', async () => {
    const bytes = writeTiff({ width: 40, height: 20, bands: 3, type: 'u16', value: (col, _row, band) => (band === 2 ? (col < 10 ? 0 : 65535) : 100 * (band + 1) + col) });
    const { alphaBand, bands } = await describeRaster(bytes, { fileName: 'flight.tif', answers: { maskBand: true } });
    expect([alphaBand, ...bands.map(({ index }) => index)]).toEqual([3, 1, 2]);
    const [first] = await readPixels(bytes, [1, 2], alphaBand);
    expect([first![9], first![10]]).toEqual([NaN, 110]);
    expect((await describeRaster(bytes, { fileName: 'flight.tif', answers: { maskBand: false } })).alphaBand).toBeNull();
  });

  it('leaves out the tiles that a sparse file leaves out', async () => {
    const [band] = await readPixels(writeTiff({ width: 40, height: 20, tile: 16, block: (honest, index) => (index === 1 ? new Uint8Array(0) : honest) }), [1]);
    expect(Number.isNaN(band![20])).toBe(true);
    expect(band![0]).toBe(0);
    expect(band![33]).toBe(33);
  });
});

describe('LZW', () => {
  it('decodes the worked example of TIFF 6.0, section 13', () => {
    // Codes 256, 7, 258, 8, 8, 258, 6, 6, 257 of nine bits each for the text 7 7 7 8 8 7 7 6 6.
    const codes = [256, 7, 258, 8, 8, 258, 6, 6, 257];
    const bits = codes.map((code) => code.toString(2).padStart(9, '0')).join('').padEnd(88, '0');
    const packed = Uint8Array.from(bits.match(/.{8}/g)!, (byte) => parseInt(byte, 2));
    expect([...decodeLzw(packed, 9)]).toEqual([7, 7, 7, 8, 8, 7, 7, 6, 6]);
  });

  it('gives what there is of data cut short, and never more than asked', () => {
    expect(decodeLzw(new Uint8Array([0x80, 0x01]), 100).length).toBeLessThanOrEqual(100);
    expect(decodeLzw(new Uint8Array(0), 100).length).toBe(0);
  });
});

const gdal = existsSync('/usr/bin/gdal_translate');

describe.skipIf(!gdal)('pixel for pixel against GDAL (skipped without gdal-bin)', () => {
  const grey = fixture('l7_red_nir.tif');
  const float = fixture('dem.tif');
  const options: [string, string, string[]][] = [
    ['Deflate, predictor 2, bands apart', grey, ['-ot', 'UInt16', '-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=2', '-co', 'INTERLEAVE=BAND', '-co', 'TILED=YES', '-co', 'BLOCKXSIZE=32', '-co', 'BLOCKYSIZE=16']],
    ['32-bit whole numbers, LZW, predictor 2', grey, ['-ot', 'Int32', '-co', 'COMPRESS=LZW', '-co', 'PREDICTOR=2']],
    ['64-bit floats, Deflate, predictor 3', float, ['-ot', 'Float64', '-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=3']],
    ['64-bit floats, Deflate, predictor 2', float, ['-ot', 'Float64', '-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=2']],
    ['floats, predictor 2, big-endian', float, ['-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=2', '-co', 'ENDIANNESS=BIG']],
    ['half floats', float, ['-co', 'NBITS=16', '-co', 'COMPRESS=LZW']],
    ['12 bits, two bands', grey, ['-ot', 'UInt16', '-co', 'NBITS=12', '-co', 'COMPRESS=DEFLATE']],
    ['7 bits, bands apart', grey, ['-scale', '0', '255', '0', '127', '-co', 'NBITS=7', '-co', 'INTERLEAVE=BAND']],
    ['1 bit', grey, ['-b', '1', '-scale', '60', '61', '0', '1', '-co', 'NBITS=1']],
    ['LZMA tiles of 16-bit values', grey, ['-ot', 'UInt16', '-co', 'COMPRESS=LZMA', '-co', 'TILED=YES', '-co', 'BLOCKXSIZE=48', '-co', 'BLOCKYSIZE=48']],
    ['ZSTD with predictor 3', float, ['-co', 'COMPRESS=ZSTD', '-co', 'PREDICTOR=3']],
    ['cloud-optimised', grey, ['-of', 'COG', '-co', 'COMPRESS=LZW', '-co', 'BLOCKSIZE=128']],
  ];

  it.each(options)('%s', async (_, source, args) => {
    const folder = mkdtempSync(join(tmpdir(), 'encodings-'));
    try {
      const env = { ...process.env, GDAL_PAM_ENABLED: 'NO' };
      execFileSync('/usr/bin/gdal_translate', ['-q', ...args, source, join(folder, 'in.tif')], { env });
      execFileSync('/usr/bin/gdal_translate', ['-q', '-of', 'ENVI', '-ot', 'Float64', '-co', 'INTERLEAVE=BSQ', join(folder, 'in.tif'), join(folder, 'out.bin')], { env });
      const raw = readFileSync(join(folder, 'out.bin'));
      const wanted = new Float64Array(raw.buffer.slice(raw.byteOffset, raw.byteOffset + raw.byteLength));
      const bands = wanted.length / (104 * 93);
      const pixels = await readPixels(join(folder, 'in.tif'), Array.from({ length: bands }, (__, i) => i + 1));
      expect(differing(pixels, Array.from({ length: bands }, (__, i) => wanted.slice(i * 104 * 93, (i + 1) * 104 * 93)))).toBe(0);
    } finally {
      rmSync(folder, { recursive: true });
    }
  });
});
