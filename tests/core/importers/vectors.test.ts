import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { MultiPolygon, Polygon } from 'geojson';
import { describe, expect, it } from 'vitest';
import { readVectors } from '../../../server/importers/vector/readVectors.ts';
import { areaHa } from '../../../server/importers/vector/positions.ts';
import { findCrossings } from '../../../server/importers/vector/selfCrossing.ts';
import { squareLonLat, squareXY, text, utm31Prj } from './corpus.ts';
import { writeShapefile, type ShapefilePlan } from './writeShapefile.ts';
import { writeZip } from './writeZip.ts';

const tracts = join(import.meta.dirname, '../../fixtures/rasters/tracts.shp.zip');
const zipOf = (plan: ShapefilePlan, more: Record<string, string> = {}): Uint8Array => writeZip({ ...Object.fromEntries(Object.entries(writeShapefile(plan)).map(([ending, bytes]) => [`soil.${ending}`, bytes])), 'soil.prj': utm31Prj, ...more });
const read = (bytes: Uint8Array | string, fileName = 'soil.zip') => readVectors(bytes, { fileName });
const polygon = (coordinates: unknown): Uint8Array => text(JSON.stringify({ type: 'Polygon', coordinates }));

describe('outlines too tangled to mend', () => {
  const area = (ring: readonly (readonly number[])[]) => ({ type: 'Feature', properties: { n: 1 }, geometry: { type: 'Polygon', coordinates: [ring] } });
  const read = (features: unknown[]) => readVectors(new TextEncoder().encode(JSON.stringify({ type: 'FeatureCollection', features })), { fileName: 'a.geojson' });
  let state = 11;
  const random = () => (state = (state * 48_271) % 2_147_483_647) / 2_147_483_647;

  it('are named with their place and not mended, in little time', async () => {
    const scribble = Array.from({ length: 3000 }, () => [3 + random() / 1000, 44 + random() / 1000]);
    const { repairs } = await read([area([...scribble, scribble[0]!])]);
    expect(repairs).toHaveLength(1);
    expect(repairs[0]).toMatchObject({ repaired: null, problem: expect.stringMatching(/more than a thousand times, first at 44\.\d{6}, 3\.\d{6}\.$/) });
  });

  it('are found in combs of either direction without comparing every tooth with every other', () => {
    const teeth = 40_000;
    const comb = Array.from({ length: teeth }, (_, i) => [[0, i], [1e6, i], [1e6, i + 0.4], [0, i + 0.5]]).flat();
    const closed = (ring: readonly number[][]) => [...ring, [-1, teeth], [-1, 0], ring[0]!];
    const turned = (ring: readonly number[][]) => ring.map(([x, y]) => [y!, x!]);
    for (const ring of [closed(comb), turned(closed(comb))]) expect(findCrossings([ring]).count).toBe(0);
    // One tooth leans over its two neighbours.
    const crossed = closed(comb.map(([x, y], i) => (i === 4 * 7 + 1 ? [x!, y! + 1.2] : [x!, y!])));
    const [found, other] = [findCrossings([crossed]), findCrossings([turned(crossed)])];
    expect(found.count).toBeGreaterThan(0);
    expect(other.count).toBe(found.count);
    expect(other.first).toEqual([found.first![1], found.first![0]]);
  });
});

describe('a real shapefile', () => {
  it('has the areas, attributes and system that OGR 3.6.2 reads', async () => {
    const { layers, epsg } = await read(tracts);
    const [layer] = layers;
    expect(epsg).toBe(4326);
    expect(layer!.geometryKinds).toEqual(['Polygon']);
    const byTract = new Map(layer!.featuresLonLat.features.map(({ properties, geometry }) => [properties!['tract'], areaHa(geometry as Polygon)]));
    // Planar areas in UTM zone 25 south by OGR, square metres.
    for (const [tract, m2] of [[332, 898846.2883], [333, 474102.616], [334, 985631.7211], [338, 1262683.4847], [341, 516896.0383]] as const) expect(Math.abs(byTract.get(tract)! * 1e4 - m2)).toBeLessThan(0.01);
    expect(layer!.fields.find(({ name }) => name === 'kind')).toMatchObject({ kind: 'text', examples: ['RURAL'], distinct: 1, missing: 0 });
    expect(layer!.fields.find(({ name }) => name === 'tract')).toMatchObject({ kind: 'number', distinct: 5 });
  });
});

describe.skipIf(!hasOgr())('a real GeoPackage, written by OGR', () => {
  it('has the same shapes and attributes as the shapefile it was made from', async () => {
    const folder = mkdtempSync(join(tmpdir(), 'gpkg-'));
    try {
      const path = join(folder, 'tracts.gpkg');
      execFileSync('ogr2ogr', ['-f', 'GPKG', path, `/vsizip/${tracts}`, '-t_srs', 'EPSG:31985', '-nln', 'tracts'], { stdio: 'ignore' });
      const { layers, epsg } = await read(path, 'tracts.gpkg');
      expect(epsg).toBe(31985);
      const [original] = (await read(tracts)).layers;
      expect(layers[0]!.fields.filter(({ name }) => name !== 'fid').map(({ name, kind, distinct }) => ({ name, kind, distinct }))).toEqual(original!.fields.map(({ name, kind, distinct }) => ({ name, kind, distinct })));
      layers[0]!.featuresLonLat.features.forEach(({ geometry }, at) => expect(areaHa(geometry as Polygon)).toBeCloseTo(areaHa(original!.featuresLonLat.features[at]!.geometry as Polygon), 4));
    } finally {
      rmSync(folder, { recursive: true });
    }
  });
});

function hasOgr(): boolean {
  try {
    execFileSync('ogr2ogr', ['--version'], { stdio: 'ignore' });
    return true;
  } catch {
    return false;
  }
}

describe('attribute tables', () => {
  const fields = [{ name: 'NAME', type: 'C', width: 12 }, { name: 'AWC', type: 'N', width: 8 }, { name: 'SEEN', type: 'D', width: 8 }, { name: 'WET', type: 'L', width: 1 }] as const;

  it('keeps numbers, texts, dates and yes/no, and null where a cell is empty', async () => {
    const { layers } = await read(zipOf({ records: [[squareXY], [squareXY.map(([x, y]) => [x + 200, y])]], fields, rows: [['Upper', '155.8', '20260714', 'T'], ['', '', '00000000', '?']] }));
    expect(layers[0]!.featuresLonLat.features.map(({ properties }) => properties)).toEqual([
      { NAME: 'Upper', AWC: 155.8, SEEN: '2026-07-14', WET: true },
      { NAME: null, AWC: null, SEEN: null, WET: null },
    ]);
  });

  const bytes = { 'Série': [0x53, 0xe9, 0x72, 0x69, 0x65], dos: [0x53, 0x82, 0x72, 0x69, 0x65], utf8: [0x53, 0xc3, 0xa9, 0x72, 0x69, 0x65] };
  it.each([
    ['windows-1252 named in .cpg', bytes['Série'], '1252'],
    ['ISO 8859-1 named in .cpg', bytes['Série'], 'ISO 88591'],
    ['UTF-8 named in .cpg', bytes.utf8, 'UTF-8'],
    ['UTF-8 by number', bytes.utf8, '65001'],
    ['DOS code page 850', bytes.dos, 'CP850'],
    ['DOS code page 437', bytes.dos, 'OEM 437'],
  ])('reads accents in %s', async (_, letters, cpg) => {
    const { layers } = await read(zipOf({ records: [[squareXY]], rows: [['x']], encode: () => Uint8Array.from(letters) }, { 'soil.cpg': cpg }));
    expect(Object.values(layers[0]!.featuresLonLat.features[0]!.properties!)).toEqual(['Série']);
  });

  it('two columns of one name do not hide each other', async () => {
    const { layers } = await read(zipOf({ records: [[squareXY]], fields: [{ name: 'A', type: 'C', width: 5 }, { name: 'A', type: 'C', width: 5 }], rows: [['one', 'two']] }));
    expect(layers[0]!.featuresLonLat.features[0]!.properties).toEqual({ A: 'one', 'A (2)': 'two' });
  });
});

describe('holes and parts', () => {
  const shift = (dx: number, dy: number) => squareXY.map(([x, y]) => [x + dx, y + dy]);
  const hole = [[500020, 4950020], [500060, 4950020], [500060, 4950060], [500020, 4950060], [500020, 4950020]];

  it('a hole is taken off the area of its part', async () => {
    const { layers } = await read(zipOf({ records: [[squareXY, hole]] }));
    expect(areaHa(layers[0]!.featuresLonLat.features[0]!.geometry as Polygon)).toBeCloseTo(1 - 0.16, 6);
  });

  it('a hole goes to the part it lies in, not to the smallest box around it', async () => {
    // A U-shaped part whose box holds a small square; the hole lies in the arm of the U, inside the small square's box too.
    const u = [[500000, 4950000], [500000, 4950100], [500030, 4950100], [500030, 4950030], [500070, 4950030], [500070, 4950100], [500100, 4950100], [500100, 4950000], [500000, 4950000]];
    const inner = [[500035, 4950035], [500035, 4950060], [500065, 4950060], [500065, 4950035], [500035, 4950035]];
    const armHole = [[500005, 4950040], [500010, 4950040], [500010, 4950050], [500005, 4950050], [500005, 4950040]];
    const { layers } = await read(zipOf({ records: [[u, inner, armHole]] }));
    const geometry = layers[0]!.featuresLonLat.features[0]!.geometry as MultiPolygon;
    expect(geometry.coordinates.map((rings) => rings.length).sort()).toEqual([1, 2]);
    expect(areaHa(geometry)).toBeCloseTo((10000 - 40 * 70 + 30 * 25 - 50) / 1e4, 6);
  });

  it('parts of one record stay one shape', async () => {
    const { layers } = await read(zipOf({ records: [[squareXY, shift(200, 0)]] }));
    expect(layers[0]!.featuresLonLat.features).toHaveLength(1);
    expect(areaHa(layers[0]!.featuresLonLat.features[0]!.geometry as MultiPolygon)).toBeCloseTo(2, 6);
  });
});

describe('outlines that cross themselves', () => {
  it('finds the place of the one crossing of a bow-tie', () => {
    expect(findCrossings([[[0, 0], [2, 2], [2, 0], [0, 2], [0, 0]]])).toEqual({ first: [1, 1], count: 1 });
  });

  it('does not mistake shared corners, spikes or holes that touch for crossings', () => {
    expect(findCrossings([[[0, 0], [4, 0], [4, 4], [0, 4], [0, 0]], [[0, 0], [1, 2], [2, 1], [0, 0]]]).count).toBe(0);
    expect(findCrossings([[[0, 0], [4, 0], [4, 4], [4, 6], [4, 4], [0, 4], [0, 0]]]).count).toBe(0);
  });

  it('finds a hole that crosses its outline', () => {
    expect(findCrossings([[[0, 0], [4, 0], [4, 4], [0, 4], [0, 0]], [[3, 1], [5, 1], [5, 2], [3, 2], [3, 1]]]).count).toBe(2);
  });

  it('agrees with comparing every pair of edges on a star of 400 edges', () => {
    const star = Array.from({ length: 401 }, (_, i) => [Math.cos((i * 137.5 * Math.PI) / 180), Math.sin((i * 137.5 * Math.PI) / 180)]);
    const cross = (a: number[], b: number[], c: number[]): number => (b[0]! - a[0]!) * (c[1]! - a[1]!) - (b[1]! - a[1]!) * (c[0]! - a[0]!);
    let pairs = 0;
    for (let i = 0; i < 400; i++) for (let j = i + 2; j < 400; j++) if (cross(star[i]!, star[i + 1]!, star[j]!) * cross(star[i]!, star[i + 1]!, star[j + 1]!) < 0 && cross(star[j]!, star[j + 1]!, star[i]!) * cross(star[j]!, star[j + 1]!, star[i + 1]!) < 0) pairs++;
    expect(findCrossings([star], Infinity).count).toBe(pairs);
  });

  it('offers a repair with the area before and after', async () => {
    // Two triangles of 20 × 10 m and 80 × 40 m meet where the outline crosses itself.
    const [west, south, east, north] = [squareLonLat[0]![0], squareLonLat[0]![1], squareLonLat[2]![0], squareLonLat[2]![1]];
    const { repairs } = await read(polygon([[[west, south], [east, south], [west + (east - west) * 0.4, north], [east, north], [west, south]]]), 'block.geojson');
    expect(repairs).toHaveLength(1);
    expect(repairs[0]!.problem).toMatch(/crosses itself once, first at 44\.7\d+, 3\.0\d+\./);
    expect(repairs[0]!.areaAfterHa).toBeGreaterThan(repairs[0]!.areaBeforeHa);
    expect(areaHa(repairs[0]!.repaired!)).toBeCloseTo(repairs[0]!.areaAfterHa, 9);
    const polygons = repairs[0]!.repaired!.type === 'Polygon' ? [(repairs[0]!.repaired as Polygon).coordinates] : (repairs[0]!.repaired as MultiPolygon).coordinates;
    expect(polygons.every((rings) => findCrossings(rings).count === 0)).toBe(true);
  });
});

it('positions in degrees keep every digit', async () => {
  const { layers } = await read(polygon([squareLonLat]), 'block.geojson');
  expect((layers[0]!.featuresLonLat.features[0]!.geometry as Polygon).coordinates).toEqual([squareLonLat]);
});

it('a walk around the block becomes an outline with the area walked', async () => {
  const walk = squareLonLat.slice(0, 4).map(([lon, lat]) => `<trkpt lat="${lat}" lon="${lon}"><time>2026-07-14T08:00:00Z</time></trkpt>`).join('');
  const { layers } = await read(text(`<gpx version="1.1" creator="t" xmlns="http://www.topografix.com/GPX/1/1"><trk><name>Upper</name><trkseg>${walk}<trkpt lat="44.70302" lon="3.00101"/></trkseg></trk></gpx>`), 'walk.gpx');
  const [feature] = layers[0]!.featuresLonLat.features;
  expect(feature!.properties).toEqual({ name: 'Upper' });
  // 0.00126° × 0.0009° at 44.7° N: 99.8 m × 100.0 m on the ellipsoid.
  expect(areaHa(feature!.geometry as Polygon)).toBeCloseTo(0.998, 2);
});

it('nothing in a file changes the objects of the program', async () => {
  await read(text('{"type":"Feature","properties":{"__proto__":{"polluted":1}},"geometry":{"type":"Point","coordinates":[3,44]}}'), 'x.geojson');
  expect(({} as Record<string, unknown>)['polluted']).toBeUndefined();
});

it('the same shapefile read from a path and from bytes is the same', async () => {
  expect(await read(new Uint8Array(readFileSync(tracts)))).toEqual(await read(tracts));
});
