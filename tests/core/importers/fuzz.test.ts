import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { seededRandom } from '../../../shared/analysis/random.ts';
import { gridOfOutline } from '../../../shared/analysis/grid.ts';
import { understandFile } from '../../../server/importers/formats.ts';
import { ImportProblem } from '../../../server/importers/importProblem.ts';
import { readRasterOntoGrids } from '../../../server/importers/raster/readRasterOntoGrids.ts';
import { squareLonLat, squareXY, text, utm31Prj } from './corpus.ts';
import { writeShapefile } from './writeShapefile.ts';
import { writeTiff } from './writeTiff.ts';
import { writeZip } from './writeZip.ts';

const fixture = (name: string): Uint8Array => new Uint8Array(readFileSync(join(import.meta.dirname, '../../fixtures/rasters', name)));
const xml = `<kml xmlns="http://www.opengis.net/kml/2.2"><Placemark><name>A</name><Polygon><outerBoundaryIs><LinearRing><coordinates>${squareLonLat.map((position) => position.join(',')).join(' ')}</coordinates></LinearRing></outerBoundaryIs></Polygon></Placemark></kml>`;

/** Small good files of every format. */
const seeds: readonly (readonly [name: string, bytes: Uint8Array])[] = [
  ['strips.tif', writeTiff({ width: 40, height: 30, bands: 2, rowsPerStrip: 7 })],
  ['tiles.tif', writeTiff({ width: 40, height: 30, tile: 16, compression: 8, type: 'f32', noData: '-9999' })],
  ['big.tif', writeTiff({ width: 40, height: 30, bigTiff: true, bigEndian: true, tile: 16 })],
  ['lzw.tif', fixture('l7_lzw_p2_rows.tif')],
  ['lzma.tif', fixture('l7_lzma.tif')],
  ['zstd.tif', fixture('l7_u16_zstd_p2_tiled.tif')],
  ['packbits.tif', fixture('l7_packbits_band.tif')],
  ['soil.zip', writeZip({ ...Object.fromEntries(Object.entries(writeShapefile({ records: [[squareXY], [squareXY]] })).map(([ending, bytes]) => [`soil.${ending}`, bytes])), 'soil.prj': utm31Prj }, 0)],
  ['blocks.geojson', text(JSON.stringify({ type: 'FeatureCollection', features: [{ type: 'Feature', properties: { a: 1 }, geometry: { type: 'Polygon', coordinates: [squareLonLat] } }] }))],
  ['blocks.kml', text(xml)],
  ['ec.csv', text('id;lat;lon;ec\n1;44,7031;3,0011;"12,5"\n2;44,7032;3,0012;13\n')],
];

const grids = [gridOfOutline([[[[500000, 4949900], [500080, 4949900], [500080, 4950000], [500000, 4950000], [500000, 4949900]]]], 32631, 4)];

/** Ends in an answer or an ImportProblem, in time; anything else fails the test with the damage that caused it. */
async function survives(bytes: Uint8Array, fileName: string, damage: string): Promise<void> {
  const start = process.cpuUsage();
  try {
    const understood = await understandFile(bytes, { fileName });
    if (understood.kind === 'raster' && understood.reference !== null) {
      await readRasterOntoGrids(bytes, { fileName }, { quantity: { kind: 'band', band: understood.bands[0]!.index, method: 'mean' }, grids });
    }
  } catch (error) {
    expect(error, damage).toBeInstanceOf(ImportProblem);
    expect((error as ImportProblem).message, damage).toMatch(/^[^:]+: .+\.$/s);
  }
  const { user, system } = process.cpuUsage(start);
  expect((user + system) / 1000, damage).toBeLessThan(5000);
}

describe('damage of every kind ends in an answer or a plain refusal', () => {
  it.each(seeds)('%s cut at 60 places', async (name, bytes) => {
    for (let i = 0; i < 60; i++) {
      const length = Math.floor((i / 60) * bytes.length);
      await survives(bytes.slice(0, length), name, `${name} cut to ${length} bytes`);
    }
  });

  it.each(seeds)('%s with bytes changed, 150 times', async (name, bytes) => {
    const random = seededRandom(name.length * 7919 + bytes.length);
    for (let i = 0; i < 150; i++) {
      const changed = new Uint8Array(bytes);
      const places: string[] = [];
      for (let n = 0; n < 1 + (i % 6); n++) {
        // Heads and tails hold the counts and offsets: half of the changes go there.
        const span = random() < 0.5 ? Math.min(400, bytes.length) : bytes.length;
        const at = random() < 0.5 ? Math.floor(random() * span) : bytes.length - 1 - Math.floor(random() * span);
        const value = random() < 0.3 ? 255 : Math.floor(random() * 256);
        changed[at] = value;
        places.push(`${at}=${value}`);
      }
      await survives(changed, name, `${name} with ${places.join(' ')}`);
    }
  });
});
