import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { strFromU8, unzipSync } from 'fflate';
import type { FeatureCollection, MultiLineString, MultiPolygon, Point, Position } from 'geojson';
import { fromArrayBuffer } from 'geotiff';
import Papa from 'papaparse';
import * as shapefiles from 'shpjs';
import initSqlJs from 'sql.js';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { decodeFloatCells, decodeLabels } from '../../shared/analysis/cellBytes.ts';
import { cellAt } from '../../shared/analysis/grid.ts';
import { channels, zoneStyle } from '../../shared/catalog/zoneStyles.ts';
import { vineLabel } from '../../shared/geo/numbering.ts';
import { polygonsToUtm, toUtm } from '../../shared/geo/utm.ts';
import { polygonsArea, signedArea } from '../../shared/geo/rings.ts';
import type { MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import type { ZoneOperation, ZoningDoubt, ZoningView } from '../../shared/contracts/zonings.ts';
import { exportFormats } from '../../server/exporters/formats.ts';
import { gridOf } from '../../server/ground/blockVines.ts';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { Block } from '../../server/models/Block.ts';
import { BlockLayer } from '../../server/models/BlockLayer.ts';
import { Layer } from '../../server/models/Layer.ts';
import { Person } from '../../server/models/Person.ts';
import { ZoningCandidate } from '../../server/models/ZoningCandidate.ts';
import { closeComputePool, openComputePool } from '../../server/workers/computePool.ts';
import { hasTool, readWithGdal } from './support/gdal.ts';
import { makePlateauBlock, workOnZoning, type PlateauBlock } from './support/makePlateauBlock.ts';
import { outline, place } from './support/shapes.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

/** The reader's declared types name only the part that the importers use. */
const shp = (shapefiles as unknown as { default: (zip: ArrayBuffer) => Promise<FeatureCollection<MultiPolygon>> }).default;

let app: TestApp;
let base: string;
let manager: Agent;
let managerId: string;
let plot: PlateauBlock;
let zoningId: string;
let seen: ZoningView;
let folder: string;

const names = ['=HYPERLINK("x")', 'Ødegård–Šípek "Süd", 丘'];

beforeAll(async () => {
  app = await startTestApp();
  openComputePool(1);
  folder = mkdtempSync(join(tmpdir(), 'patchrow-exports-'));
  const { estateId, ownerId, ownerEmail } = await app.addEstate('Exports test');
  base = `/api/estates/${estateId}`;
  plot = await makePlateauBlock({ estateId, personId: ownerId });
  const person = await app.addPerson(estateId, 'manager');
  managerId = person.id;
  manager = await app.as(person.email);
  const owner = await app.as(ownerEmail);
  const asked = await owner.post(`${base}/blocks/${plot.blockId}/zonings`, { layers: [{ layerId: plot.layerId }] });
  await workOnZoning(asked.body.jobId as string);
  zoningId = asked.body.zoningId as string;
  await manager.patch(`${base}/zonings/${zoningId}`, { chosenZones: 2, name: 'Été 2026' });
  const edit = async (operation: ZoneOperation) => {
    const { revision } = (await manager.get(`${base}/zonings/${zoningId}`)).body as ZoningView;
    expect((await manager.post(`${base}/zonings/${zoningId}/edits`, { operation, revision })).status).toBe(201);
  };
  // An island in the other zone, so that there is a hole to be wound the other way.
  await edit({ kind: 'giveArea', toZone: 2, area: { type: 'Polygon', coordinates: outline([[22, 40], [42, 40], [42, 60], [22, 60]]).coordinates as [number, number][][] } });
  for (const [index, name] of names.entries()) await edit({ kind: 'rename', zone: index + 1, name });
  seen = (await manager.get(`${base}/zonings/${zoningId}`)).body as ZoningView;
});
afterAll(async () => {
  rmSync(folder, { recursive: true, force: true });
  await closeComputePool();
  await app.close();
});

const take = (format: string, query = '') =>
  manager.get(`${base}/zonings/${zoningId}/export?format=${format}${query}`).buffer(true).parse((response, done) => {
    const parts: Buffer[] = [];
    response.on('data', (part: Buffer) => parts.push(part));
    response.on('end', () => done(null, Buffer.concat(parts)));
  });
const bytesOf = async (format: string) => {
  const answer = await take(format);
  expect(answer.status).toBe(200);
  return answer.body as Buffer;
};

const areaOf = (coordinates: Position[][][]) => polygonsArea(polygonsToUtm(coordinates as unknown as MultiPolygonLonLat, place.epsg));

/** Distance in metres from each position of one set to the nearest of the other; the greatest of them. */
function farthest(from: Position[][][], to: Position[][][]): number {
  const metres = (shape: Position[][][]) => polygonsToUtm(shape as unknown as MultiPolygonLonLat, place.epsg).flat(2);
  const others = metres(to);
  return Math.max(...metres(from).map(([x, y]) => Math.min(...others.map(([u, v]) => Math.hypot(u - x, v - y)))));
}

function expectZones(read: FeatureCollection<MultiPolygon>, nameOf: (properties: Record<string, unknown>) => unknown): void {
  expect(read.features.map((feature) => nameOf(feature.properties!))).toEqual(names);
  read.features.forEach((feature, index) => {
    const zone = seen.zones[index]!;
    const { geometry } = feature as { geometry: { type: string; coordinates: Position[][] | Position[][][] } };
    const coordinates = (geometry.type === 'Polygon' ? [geometry.coordinates] : geometry.coordinates) as Position[][][];
    expect(Math.abs(areaOf(coordinates) / zone.areaM2 - 1)).toBeLessThan(1e-4);
    expect(farthest(coordinates, zone.geometry.coordinates)).toBeLessThan(0.01);
    expect(farthest(zone.geometry.coordinates, coordinates)).toBeLessThan(0.01);
  });
}

/** The rows as the table of rows has them, each line as long as its vines stand and in the ground of its zone. */
function expectRows(read: FeatureCollection<MultiLineString>, [row, from, to, zone, zoneName]: readonly string[]): void {
  const { block, rows } = plot.ground;
  const zoneOf = new Map(seen.zones.map(({ number, name }) => [number, name]));
  expect(read.features.length).toBeGreaterThan(plot.ground.stored.length);
  for (const { properties, geometry } of read.features) {
    const of = (name: string | undefined) => properties![name!] as unknown;
    const vines = Number(of(to)) - Number(of(from)) + 1;
    const lines = (geometry as unknown as { type: string }).type === 'LineString' ? [geometry.coordinates as unknown as Position[]] : geometry.coordinates;
    const points = lines.map((line) => polygonsToUtm([[line]] as unknown as MultiPolygonLonLat, place.epsg)[0]![0]!);
    const length = points.reduce((sum, line) => sum + line.slice(1).reduce((all, [x, y], at) => all + Math.hypot(x - line[at]![0], y - line[at]![1]), 0), 0);
    expect(zoneOf.get(Number(of(zone)))).toBe(of(zoneName));
    expect(rows.rows.some((_, at) => plot.ground.stored[at]!.label === of(row))).toBe(true);
    // Half a vine may be cut off where a row ends.
    expect(Math.abs(length - vines * block.vineSpacingM)).toBeLessThan(1.01 * block.vineSpacingM);
  }
  const total = read.features.reduce((sum, { properties }) => sum + Number(properties![to!]) - Number(properties![from!]) + 1, 0);
  expect(total).toBe(plot.ground.vines.count);
}

describe('formats of zones', () => {
  it('are listed for menus', async () => {
    const { body } = await manager.get('/api/formats');
    expect(body.items.map((item: { id: string }) => item.id)).toEqual(['geojson', 'shapefile', 'geopackage', 'kml', 'rows', 'rowsGeojson', 'rowsShapefile', 'rowsKml', 'vines', 'vinesGeojson', 'geotiff', 'layers', 'membership']);
    expect((await (await app.browser()).get('/api/formats')).status).toBe(401);
  });

  it('are taken with a name, a type, and a note of who took them', async () => {
    const answer = await take('geojson');
    expect(answer.headers['content-type']).toMatch('application/geo+json');
    expect(decodeURIComponent(answer.headers['content-disposition'] as string)).toContain('Côte à l’Éperon Été 2026.geojson');
    expect(await AuditEntry.query().where({ action: 'zones.export', subjectId: zoningId }).orderBy('id', 'desc').first()).toMatchObject({ after: { format: 'geojson' }, subjectName: 'Côte à l’Éperon' });
  });

  it.each(exportFormats)('are of the kind that their table says: $id', async ({ id, mediaType }) => {
    expect((await take(id)).headers['content-type']).toBe(mediaType);
  });

  it('are taken under names that end in the middle of an emoji, and those of rows can be told from those of zones', async () => {
    const { name } = await Block.query().findById(plot.blockId).throwIfNotFound();
    await Block.query().findById(plot.blockId).patch({ name: `a${'🍇'.repeat(39)}` });
    await manager.patch(`${base}/zonings/${zoningId}`, { name: `b${'🍷'.repeat(39)}` });
    const [zones, rows] = [await take('geojson'), await take('rowsGeojson')];
    await manager.patch(`${base}/zonings/${zoningId}`, { name: 'Été 2026' });
    await Block.query().findById(plot.blockId).patch({ name });
    expect([zones.status, rows.status]).toEqual([200, 200]);
    const named = [zones, rows].map(({ headers }) => /filename\*=UTF-8''(.+)$/.exec(headers['content-disposition'] as string)![1]!).map(decodeURIComponent);
    expect(named[0]).toMatch(/^a(🍇)+ b(🍷)+\.geojson$/u);
    expect(named[1]).toMatch(/^a(🍇)+ b(🍷)+ rows\.geojson$/u);
  });

  it('refuse what they do not know', async () => {
    expect((await manager.get(`${base}/zonings/${zoningId}/export`)).status).toBe(422);
    const answer = await manager.get(`${base}/zonings/${zoningId}/export?format=dwg`);
    expect([answer.status, answer.body.detail]).toEqual([422, expect.stringMatching(/"dwg".*geojson, shapefile/)]);
    expect((await manager.get(`${base}/zonings/${plot.blockId}/export?format=kml`)).status).toBe(404);
  });

  it('can also be taken of a number of zones that nobody kept', async () => {
    const answer = await take('geojson', '&zones=1');
    const read = JSON.parse((answer.body as Buffer).toString('utf8')) as FeatureCollection;
    expect(read.features).toHaveLength(1);
  });
});

describe('GeoJSON', () => {
  it('is as RFC 7946 asks: longitude first, closed, outer rings to the left, holes to the right', async () => {
    const read = JSON.parse((await bytesOf('geojson')).toString('utf8')) as FeatureCollection<MultiPolygon>;
    expectZones(read, (properties) => properties.name);
    expect('crs' in read).toBe(false);
    let holes = 0;
    for (const polygon of read.features.flatMap((feature) => feature.geometry.coordinates)) {
      polygon.forEach((ring, index) => {
        expect(ring[0]).toEqual(ring.at(-1));
        expect(ring.length).toBeGreaterThanOrEqual(4);
        expect(Math.sign(signedArea(ring as [number, number][]))).toBe(index === 0 ? 1 : -1);
        if (index > 0) holes += 1;
      });
    }
    expect(holes).toBeGreaterThan(0);
  });
});

describe('the shapefile', () => {
  it('is read back by shpjs with names, areas and vertices', async () => {
    const bytes = await bytesOf('shapefile');
    const read = await shp(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length) as ArrayBuffer);
    expectZones(read, (properties) => properties.NAME);
    expect(read.features.map((feature) => [feature.properties!.ZONE, feature.properties!.VINES])).toEqual(seen.zones.map((zone) => [zone.number, zone.vines]));
  });

  it('says its encoding and reference, and turns outer rings clockwise', async () => {
    const files = unzipSync(await bytesOf('shapefile'));
    expect(Object.keys(files).sort()).toEqual(['zones.cpg', 'zones.dbf', 'zones.prj', 'zones.shp', 'zones.shx']);
    expect(strFromU8(files['zones.cpg']!)).toBe('UTF-8');
    expect(strFromU8(files['zones.prj']!)).toMatch(/^GEOGCS\["GCS_WGS_1984"/);
    const main = Buffer.from(files['zones.shp']!);
    const [parts, points] = [main.readInt32LE(108 + 36), main.readInt32LE(108 + 40)];
    const starts = Array.from({ length: parts }, (_, part) => main.readInt32LE(108 + 44 + part * 4));
    const at = 108 + 44 + parts * 4;
    const ring = Array.from({ length: (starts[1] ?? points) }, (_, index): [number, number] => [main.readDoubleLE(at + index * 16), main.readDoubleLE(at + index * 16 + 8)]);
    expect(signedArea(ring)).toBeLessThan(0);
    expect(main.length).toBe(main.readInt32BE(24) * 2);
  });

  it.skipIf(!hasTool('ogr2ogr'))('is read by GDAL with names, areas and vertices', async () => {
    const file = join(folder, 'zones.zip');
    writeFileSync(file, await bytesOf('shapefile'));
    expectZones(readWithGdal<FeatureCollection<MultiPolygon>>(`/vsizip/${file}/zones.shp`), (properties) => properties.NAME);
    expect(execFileSync('ogrinfo', ['-so', '-al', `/vsizip/${file}/zones.shp`], { encoding: 'utf8' })).toMatch(/WGS[ _](19)?84/);
  });
});

describe('the GeoPackage', () => {
  it('says what it is in its header and keeps the rows beside the zones', async () => {
    const bytes = await bytesOf('geopackage');
    expect(bytes.toString('latin1', 0, 15)).toBe('SQLite format 3');
    expect([bytes.toString('latin1', 68, 72), bytes.readUInt32BE(60)]).toEqual(['GPKG', 10300]);
    const { Database } = await initSqlJs();
    const db = new Database(bytes);
    expect(db.exec('select sum(to_vine - from_vine + 1) from rows')[0]!.values[0]![0]).toBe(seen.zones.reduce((sum, zone) => sum + zone.vines, 0));
    expect(db.exec('pragma foreign_key_check')).toEqual([]);
    db.close();
  });

  it('can be of zones that bear the name of its other table', async () => {
    await manager.patch(`${base}/zonings/${zoningId}`, { name: 'rows by zone' });
    const { status } = await take('geopackage');
    await manager.patch(`${base}/zonings/${zoningId}`, { name: 'Été 2026' });
    expect(status).toBe(200);
  });

  it.skipIf(!hasTool('ogr2ogr'))('is read by GDAL with names, areas and vertices', async () => {
    const file = join(folder, 'zones.gpkg');
    writeFileSync(file, await bytesOf('geopackage'));
    expectZones(readWithGdal<FeatureCollection<MultiPolygon>>(file, 'zones'), (properties) => properties.name);
    expectRows(readWithGdal<FeatureCollection<MultiLineString>>(file, 'rows'), ['row', 'from_vine', 'to_vine', 'zone', 'zone_name']);
    expect(execFileSync('ogrinfo', ['-so', '-al', file], { encoding: 'utf8' })).toMatch(/WGS 84[\s\S]*Multi Polygon|Multi Polygon[\s\S]*WGS 84/);
  });
});

describe('layers as a raster', () => {
  it('hold the cells as they were, with position, no-data, name and unit', async () => {
    const bytes = await bytesOf('layers');
    const image = await (await fromArrayBuffer(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length) as ArrayBuffer)).getImage();
    const { x0, y0, cellSizeM, inside } = gridOf(plot.ground);
    expect([image.getOrigin().slice(0, 2), image.getResolution()[0]]).toEqual([[x0, y0], cellSizeM]);
    const [read] = (await image.readRasters()) as unknown as Float32Array[];
    const { cells } = await BlockLayer.query().findOne({ layerId: plot.layerId, blockId: plot.blockId }).throwIfNotFound();
    const stored = decodeFloatCells(cells);
    expect(read!.length).toBe(stored.length);
    read!.forEach((value, cell) => expect(Object.is(value, stored[cell]) || inside[cell] === 0).toBe(true));
  });

  it.skipIf(!hasTool('gdalinfo'))('are read by GDAL with reference, no-data and name', async () => {
    const file = join(folder, 'layers.tif');
    const name = 'Flight & "June" <b>, 日本';
    await Layer.query().findById(plot.layerId).patch({ name, unit: 'mg/L & more' });
    writeFileSync(file, await bytesOf('layers'));
    await Layer.query().findById(plot.layerId).patch({ name: 'Flight of June', unit: '' });
    const info = JSON.parse(execFileSync('gdalinfo', ['-json', file], { encoding: 'utf8' })) as { bands: { description: string; unit: string; noDataValue: unknown; type: string }[]; stac?: { 'proj:epsg'?: number }; coordinateSystem: { wkt: string } };
    expect(info.bands).toMatchObject([{ description: name, unit: 'mg/L & more', noDataValue: 'NaN', type: 'Float32' }]);
    expect(info.coordinateSystem.wkt).toContain(String(place.epsg));
  });
});

describe('memberships as a raster', () => {
  it('are a band a zone as the run found them and the confusion index, on the cells of the layers', async () => {
    const bytes = await bytesOf('membership');
    const image = await (await fromArrayBuffer(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length) as ArrayBuffer)).getImage();
    const { x0, y0, cellSizeM, inside } = gridOf(plot.ground);
    expect([image.getOrigin().slice(0, 2), image.getResolution()[0]]).toEqual([[x0, y0], cellSizeM]);
    const [first, second, confusion] = (await image.readRasters()) as unknown as Float32Array[];
    const { labels } = await ZoningCandidate.query().findOne({ zoningId, zoneCount: 2 }).throwIfNotFound();
    const zones = decodeLabels(labels);
    let sure = 0;
    inside.forEach((isInside, cell) => {
      const shares = [first![cell]!, second![cell]!];
      if (isInside === 0) return expect([...shares, confusion![cell]]).toEqual([Number.NaN, Number.NaN, Number.NaN]);
      expect(Math.abs(shares[0]! + shares[1]! - 1)).toBeLessThan(0.005);
      expect(confusion![cell]).toBeCloseTo(1 - Math.abs(shares[0]! - shares[1]!), 5);
      if (shares[zones[cell]! - 1]! > 0.9) sure += 1;
    });
    // Two plateaus with a narrow border.
    expect(sure).toBeGreaterThan(0.8 * inside.filter((one) => one === 1).length);
  });

  it.skipIf(!hasTool('gdalinfo'))('are read by GDAL with reference, no-data and names', async () => {
    const file = join(folder, 'membership.tif');
    writeFileSync(file, await bytesOf('membership'));
    const info = JSON.parse(execFileSync('gdalinfo', ['-json', file], { encoding: 'utf8' })) as { bands: { description: string; noDataValue: unknown; type: string }[]; coordinateSystem: { wkt: string } };
    expect(info.bands.map(({ description, noDataValue, type }) => [description, noDataValue, type])).toEqual(['membership 1', 'membership 2', 'confusion index'].map((name) => [name, 'NaN', 'Float32']));
    expect(info.coordinateSystem.wkt).toContain(String(place.epsg));
  });

  it('say that the zones were changed by hand, and are refused where there are none', async () => {
    const read = async (query = '') => manager.get(`${base}/zonings/${zoningId}/memberships${query}`);
    expect((await read()).body).toMatchObject({ changedByHand: true });
    expect((await read('?zones=3')).body).toMatchObject({ changedByHand: false });
    const told = async (query = '') => ((await manager.get(`${base}/zonings/${zoningId}${query}`)).body as ZoningView).certainty;
    expect([await told(), await told('?zones=3'), await told('?zones=1')]).toEqual(['kept', 'kept', 'none']);
    expect((await read('?zones=1')).body).toMatchObject({ status: 409, code: 'noMemberships', detail: expect.stringContaining('One zone') as string });
    const kept = await ZoningCandidate.query().findOne({ zoningId, zoneCount: 2 }).throwIfNotFound();
    const { memberships } = kept;
    await kept.$query().patch({ memberships: null });
    expect((await read()).body).toMatchObject({ status: 409, code: 'noMemberships', detail: expect.stringContaining('Run the zoning again') as string });
    expect(await told()).toBe('older');
    for (const format of ['membership', 'vines', 'vinesGeojson']) expect((await take(format)).status).toBe(409);
    await kept.$query().patch({ memberships });
    expect((await read()).status).toBe(200);
  });
});

describe('the vines with their certainty', () => {
  interface VineLine { row: string; vine: string; zone: string; zone_name: string; run_zone: string; membership: string; next_zone: string; certainty: string; doubtful: string; longitude: string; latitude: string }
  const table = async (query = '') => {
    const text = ((await take('vines', query)).body as Buffer).toString('utf8');
    expect(text.startsWith('\uFEFFrow,vine,zone,zone_name,run_zone,membership,next_zone,certainty,doubtful,longitude,latitude\r\n')).toBe(true);
    const { data, errors } = Papa.parse<VineLine>(text.slice(1), { header: true, skipEmptyLines: true });
    expect(errors).toEqual([]);
    return data;
  };

  it('are a line each, with the zone of now beside what the run found where the vine stands', async () => {
    const lines = await table();
    const { labels, memberships } = await ZoningCandidate.query().findOne({ zoningId, zoneCount: 2 }).throwIfNotFound();
    const [zones, shares, grid] = [decodeLabels(labels), decodeLabels(memberships!), gridOf(plot.ground)];
    expect(lines).toHaveLength(plot.ground.vines.count);
    expect(new Set(lines.map(({ row, vine }) => `${row} ${vine}`)).size).toBe(lines.length);
    for (const { number, name, vines } of seen.zones) {
      const own = lines.filter((line) => line.zone === String(number));
      expect(own).toHaveLength(vines);
      expect(own.every((line) => line.zone_name.endsWith(name))).toBe(true);
    }
    const { stored, rows, vines: standing, block } = plot.ground;
    const placeOf = new Map(Array.from(standing.x, (x, at) => [`${stored[standing.row[at]!]!.label} ${vineLabel(rows.rows[standing.row[at]!]!, standing.ordinal[at]!, block.vineOneEnd)}`, [x, standing.y[at]!] as const]));
    for (const line of lines) {
      const at = placeOf.get(`${line.row} ${line.vine}`)!;
      const [x, y] = toUtm([Number(line.longitude), Number(line.latitude)], place.epsg);
      expect(Math.hypot(x - at[0], y - at[1])).toBeLessThan(0.02);
      const cell = cellAt(grid, at);
      if (line.run_zone === '') continue;
      const [first, second] = [shares[cell]! / 250, shares[zones.length + cell]! / 250];
      const [own, next] = zones[cell] === 1 ? [first, second] : [second, first];
      expect([line.run_zone, line.next_zone]).toEqual(zones[cell] === 1 ? ['1', '2'] : ['2', '1']);
      expect([line.membership, line.certainty]).toEqual([own.toFixed(3), Math.max(0, own - next).toFixed(3)]);
    }
    expect(lines.filter((line) => line.run_zone === '').length).toBeLessThan(0.1 * lines.length);
    // The island given to zone 2 by hand keeps what the run said of it.
    expect(lines.some((line) => line.zone === '2' && line.run_zone === '1' && Number(line.certainty) > 0.5)).toBe(true);
  });

  it('calls those doubtful that are counted on the screen, zone by zone', async () => {
    for (const zones of [2, 3]) {
      const counted = (await manager.get(`${base}/zonings/${zoningId}/doubt?zones=${zones}`)).body as ZoningDoubt;
      const lines = await table(`&zones=${zones}`);
      expect(counted.doubtful).toBeGreaterThan(0);
      expect(new Set(lines.map(({ doubtful }) => doubtful))).toEqual(new Set(['yes', 'no']));
      expect(counted.byZone).toEqual([...new Set(lines.map(({ zone }) => Number(zone)))].sort().map((zone) => ({ zone, vines: lines.filter((line) => line.zone === String(zone) && line.doubtful === 'yes').length })).filter(({ vines }) => vines > 0));
    }
  });

  it('begin at row 1 and count each row from its vine 1, wherever these are', async () => {
    const { rowOneSide, vineOneEnd } = await Block.query().findById(plot.blockId).throwIfNotFound();
    const before = await table();
    await Block.query().findById(plot.blockId).patch({ rowOneSide: rowOneSide === 'high' ? 'low' : 'high', vineOneEnd: vineOneEnd === 'end' ? 'start' : 'end' });
    const after = await table();
    await Block.query().findById(plot.blockId).patch({ rowOneSide, vineOneEnd });
    const standing = (lines: VineLine[]) => lines.map(({ longitude, latitude, certainty }) => `${longitude} ${latitude} ${certainty}`);
    expect(standing(after)).toEqual(standing(before).reverse());
    for (const lines of [before, after]) lines.forEach(({ row, vine }, at) => expect(Number(vine)).toBe(lines[at - 1]?.row === row ? Number(lines[at - 1]!.vine) + 1 : 1));
  });

  it('are points in GeoJSON with the same columns', async () => {
    const lines = await table();
    const { features } = JSON.parse((await bytesOf('vinesGeojson')).toString('utf8')) as FeatureCollection<Point, Record<string, string | number | null>>;
    expect(features).toHaveLength(lines.length);
    features.forEach(({ properties, geometry }, at) => {
      const { longitude, latitude, ...columns } = lines[at]!;
      expect(Object.keys(properties)).toEqual(Object.keys(columns));
      expect([properties.row, properties.vine, properties.doubtful, properties.certainty === null ? '' : Number(properties.certainty).toFixed(3)]).toEqual([columns.row, Number(columns.vine), columns.doubtful, columns.certainty]);
      for (const [axis, degrees] of [longitude, latitude].entries()) expect(Math.abs(geometry.coordinates[axis]! - Number(degrees))).toBeLessThan(1e-7);
    });
  });

  it('have decimal commas where the reader’s spreadsheet has', async () => {
    const answer = await manager.get(`${base}/zonings/${zoningId}/export?format=vines`).set('accept-language', 'fr').buffer(true);
    expect(answer.text).toMatch(/^\uFEFF?row;vine;zone;/);
    expect(answer.text).toMatch(/;\d,\d{3};[12];\d,\d{3};(yes|no);/);
  });
});

describe('KML', () => {
  it.skipIf(!hasTool('ogr2ogr'))('is read by GDAL with names, areas and vertices', async () => {
    const file = join(folder, 'zones.kml');
    writeFileSync(file, await bytesOf('kml'));
    expectZones(readWithGdal<FeatureCollection<MultiPolygon>>(file), (properties) => properties.Name ?? properties.name);
  });

  it('escapes what would break it', async () => {
    const text = (await bytesOf('kml')).toString('utf8');
    expect(text).toContain('Ødegård–Šípek &quot;Süd&quot;, 丘');
    expect(text.match(/<Placemark>/g)).toHaveLength(2);
  });
});

describe('colours of KML', () => {
  it('are those of the screen: own ones, else those of the number', async () => {
    const abgr = (hex: string) => `66${hex.slice(5, 7)}${hex.slice(3, 5)}${hex.slice(1, 3)}`.toLowerCase();
    const shown = seen.zones.map(({ number, colour }) => abgr(colour ?? zoneStyle(number, { count: 2 }).fill));
    const text = (await bytesOf('kml')).toString('utf8');
    expect([...text.matchAll(/<PolyStyle><color>(\w+)</g)].map(([, colour]) => colour)).toEqual(shown);
    expect(new Set(shown).size).toBe(2);
  });
});

describe('rows as lines', () => {
  const titles = ['row', 'from_vine', 'to_vine', 'zone', 'zone_name'];

  it('are GeoJSON with a line for each stretch of one zone', async () => {
    expectRows(JSON.parse((await bytesOf('rowsGeojson')).toString('utf8')) as FeatureCollection<MultiLineString>, titles);
    expect(decodeURIComponent((await take('rowsGeojson')).headers['content-disposition'] as string)).toContain('Été 2026 rows.geojson');
  });

  it('are read back from the shapefile by shpjs', async () => {
    const bytes = await bytesOf('rowsShapefile');
    const read = await shp(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length) as ArrayBuffer);
    expectRows(read as unknown as FeatureCollection<MultiLineString>, titles.map((title) => title.toUpperCase()));
  });

  it.skipIf(!hasTool('ogr2ogr'))('are read from shapefile and KML by GDAL, each vertex within a centimetre', async () => {
    const own = JSON.parse((await bytesOf('rowsGeojson')).toString('utf8')) as FeatureCollection<MultiLineString>;
    const [zip, kml] = [join(folder, 'rows.zip'), join(folder, 'rows.kml')];
    writeFileSync(zip, await bytesOf('rowsShapefile'));
    writeFileSync(kml, await bytesOf('rowsKml'));
    const [shapes, marks] = [readWithGdal<FeatureCollection<MultiLineString>>(`/vsizip/${zip}/rows.shp`), readWithGdal<FeatureCollection<MultiLineString>>(kml)];
    expectRows(shapes, titles.map((title) => title.toUpperCase()));
    expectRows(marks, titles);
    for (const read of [shapes, marks]) {
      read.features.forEach(({ geometry }, at) => {
        expect(farthest([geometry.coordinates], [own.features[at]!.geometry.coordinates])).toBeLessThan(0.01);
        expect(farthest([own.features[at]!.geometry.coordinates], [geometry.coordinates])).toBeLessThan(0.01);
      });
    }
  });
});

describe('the row table', () => {
  it('begins where people begin to count: at row 1, and in each row at vine 1', async () => {
    const lines = async () => Papa.parse<{ row: string; from_vine: string; to_vine: string }>((await bytesOf('rows')).toString('utf8').slice(1), { header: true, skipEmptyLines: true }).data;
    const rowsOf = (of: { row: string }[]) => [...new Set(of.map(({ row }) => row))];
    const { rowOneSide, vineOneEnd } = await Block.query().findById(plot.blockId).throwIfNotFound();
    const before = await lines();
    await Block.query().findById(plot.blockId).patch({ rowOneSide: rowOneSide === 'high' ? 'low' : 'high', vineOneEnd: vineOneEnd === 'end' ? 'start' : 'end' });
    const after = await lines();
    await Block.query().findById(plot.blockId).patch({ rowOneSide, vineOneEnd });
    expect(rowsOf(after)).toEqual(rowsOf(before).reverse());
    for (const row of rowsOf(after)) {
      const runs = after.filter((line) => line.row === row).map(({ from_vine: from, to_vine: to }) => [Number(from), Number(to)] as const);
      expect(runs[0]![0]).toBe(1);
      runs.slice(1).forEach(([from], at) => expect(from).toBe(runs[at]![1] + 1));
    }
  });

  it('gives every vine of every row to its zone once', async () => {
    const text = (await bytesOf('rows')).toString('utf8');
    expect(text.startsWith('\uFEFFrow,from_vine,to_vine,zone,zone_name\r\n')).toBe(true);
    expect(text.endsWith('\r\n')).toBe(true);
    const { data, errors } = Papa.parse<{ row: string; from_vine: string; to_vine: string; zone: string }>(text.slice(1), { header: true, skipEmptyLines: true });
    expect(errors).toEqual([]);
    for (const zone of seen.zones) {
      const vines = data.filter((line) => Number(line.zone) === zone.number).reduce((sum, line) => sum + Number(line.to_vine) - Number(line.from_vine) + 1, 0);
      expect(vines).toBe(zone.vines);
    }
    expect(new Set(data.map((line) => line.row)).size).toBe(plot.ground.stored.length);
  });

  it('holds no formula that a spreadsheet would run', async () => {
    const { data } = Papa.parse<string[]>((await bytesOf('rows')).toString('utf8').slice(1));
    const cells = data.flat();
    expect(cells.filter((cell) => /^[=+\-@\t\r]/.test(cell))).toEqual([]);
    expect(cells).toContain(`'${names[0]}`);
    expect(cells).toContain(names[1]);
  });
});

describe('the printed report', () => {
  const print = async (query: string) => {
    const answer = await manager.get(`${base}/zonings/${zoningId}/report${query}`).buffer(true).parse((response, done) => {
      const parts: Buffer[] = [];
      response.on('data', (part: Buffer) => parts.push(part));
      response.on('end', () => done(null, Buffer.concat(parts)));
    });
    expect([answer.status, answer.headers['content-type']]).toEqual([200, 'application/pdf']);
    return answer.body as Buffer;
  };
  const textOf = (bytes: Buffer) => {
    const file = join(folder, 'report.pdf');
    writeFileSync(file, bytes);
    return execFileSync('pdftotext', ['-layout', file, '-'], { encoding: 'utf8' }).replace(/\s+/g, ' ');
  };

  /** The first page as pixels of a PPM (three channels) or PGM (one). */
  const drawn = async (how: '' | '-gray') => {
    const file = join(folder, 'drawn.pdf');
    writeFileSync(file, await print('?size=A4'));
    const bytes = execFileSync('pdftoppm', ['-r', '60', '-singlefile', ...(how === '' ? [] : [how]), file], { maxBuffer: 1e8 });
    const [head] = /^P[56]\s+\d+\s+\d+\s+\d+\s/.exec(bytes.toString('latin1', 0, 40))!;
    return bytes.subarray(head.length);
  };
  /** Share of the pixels that are within `by` of a colour in every channel. */
  const shareOf = (pixels: Buffer, colour: readonly number[], by: number) => {
    let like = 0;
    for (let at = 0; at < pixels.length; at += colour.length) if (colour.every((value, channel) => Math.abs(pixels[at + channel]! - value) <= by)) like += 1;
    return (like * colour.length) / pixels.length;
  };

  it('is a PDF of the paper asked for, 210 × 297 mm or 8.5 × 11 inches', async () => {
    const sheet = (bytes: Buffer) => /\/MediaBox \[0 0 ([\d.]+) ([\d.]+)\]/.exec(bytes.toString('latin1'))!.slice(1).map(Number);
    const [a4, letter] = [await print('?size=A4'), await print('?size=Letter')];
    expect(a4.subarray(0, 5).toString('latin1')).toBe('%PDF-');
    expect(sheet(a4).map((points) => Math.round((points / 72) * 25.4))).toEqual([210, 297]);
    expect(sheet(letter)).toEqual([612, 792]);
    for (const zones of [1, 6]) for (const size of ['A4', 'Letter']) expect((await print(`?size=${size}&zones=${zones}`)).toString('latin1').match(/\/Type \/Page\b/g)).toHaveLength(1);
    expect((await manager.get(`${base}/zonings/${zoningId}/report?size=A0`)).status).toBe(422);
  });

  it.skipIf(!hasTool('pdftotext'))('says verdict, zones, layers, and that nothing is known of ripeness yet', async () => {
    await BlockLayer.query().where({ layerId: plot.layerId }).patch({ override: { personId: plot.blockId, by: 'Inès Quillard', reason: 'Seen on foot', at: '2026-07-01' } });
    const text = textOf(await print(''));
    expect(text).toContain('Zones of Côte à l’Éperon');
    expect(text).toContain('Worth zoning into two.');
    expect(text).toContain('“Été 2026”: draft');
    // One drawn area; two names leave the ground as it was computed.
    expect(text).toContain('(steps: 1)');
    expect(text).toContain('Nothing here is said about ripeness until fruit is tested.');
    expect(text).toContain('Inès Quillard answers for it: Seen on foot');
    expect(text).toMatch(/method version \S+, seed 1/);
    expect(text).toContain('How the zones were made');
    expect(text.replace(/\s+/g, ' ')).toMatch(/averaged on cells of \d+\.\d m and smoothed over \d+\.\d m/);
    for (const zone of seen.zones) expect(text).toContain((zone.areaM2 / 10_000).toFixed(2));
    expect(text).toContain('Ødegård–Šípek');
    // As much of each zone is doubtful as its ledger says.
    const doubt = (await manager.get(`${base}/zonings/${zoningId}/doubt`)).body as ZoningDoubt;
    expect(doubt.doubtful).toBeGreaterThan(0);
    for (const zone of seen.zones) {
      const share = (100 * (doubt.byZone.find((entry) => entry.zone === zone.number)?.vines ?? 0)) / zone.vines;
      expect(text).toContain(`${zone.vines.toLocaleString('fr').replace(/\s/gu, ' ')} ${zone.missing} ${share.toFixed(0)} `);
    }
  });

  it.skipIf(!hasTool('pdftoppm'))('has the map in the zones’ colours, as different in grey as in colour', async () => {
    const [colours, greys] = [await drawn(''), await drawn('-gray')];
    const fills = [1, 2].map((number) => channels(zoneStyle(number, { count: 2 }).fill));
    for (const fill of fills) expect(shareOf(colours, fill, 3)).toBeGreaterThan(0.01);
    const [dark, light] = fills.map(([red, green, blue]) => Math.round(0.299 * red + 0.587 * green + 0.114 * blue));
    for (const grey of [dark!, light!]) expect(shareOf(greys, [grey], 6)).toBeGreaterThan(0.01);
    expect(light! - dark!).toBeGreaterThan(100);
  });

  it.skipIf(!hasTool('pdftotext'))('speaks the language of whoever prints it', async () => {
    await Person.query().where({ id: managerId }).patch({ language: 'fr' });
    const text = textOf(await print(''));
    expect(text).toContain('À diviser en deux zones.');
    expect(text).toContain(`${(seen.zones[0]!.areaM2 / 10_000).toFixed(2).replace('.', ',')}`);
    expect(text).not.toMatch(/\d\?\d/);
  });
});

describe('the GeoTIFF of zone numbers', () => {
  it('lies on the block’s grid with every cell’s zone', async () => {
    const bytes = await bytesOf('geotiff');
    const image = await (await fromArrayBuffer(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length) as ArrayBuffer)).getImage();
    const grid = gridOf(plot.ground);
    expect([image.getWidth(), image.getHeight()]).toEqual([grid.cols, grid.rows]);
    expect(image.getOrigin().slice(0, 2)).toEqual([grid.x0, grid.y0]);
    expect(image.getGeoKeys()!.ProjectedCSTypeGeoKey).toBe(grid.epsg);
    const [labels] = (await image.readRasters()) as unknown as [Uint8Array];
    const kept = (await manager.get(`${base}/zonings/${zoningId}/labels`)).body as Buffer;
    expect(Buffer.from(labels!).equals(kept)).toBe(true);
  });

  it.skipIf(!hasTool('gdalinfo'))('is read by GDAL with reference, no-data value and place', async () => {
    const file = join(folder, 'zones.tif');
    writeFileSync(file, await bytesOf('geotiff'));
    const info = JSON.parse(execFileSync('gdalinfo', ['-json', file], { encoding: 'utf8' })) as { geoTransform: number[]; bands: { type: string; noDataValue: number }[]; coordinateSystem: { wkt: string } };
    const grid = gridOf(plot.ground);
    expect(info.geoTransform).toEqual([grid.x0, grid.cellSizeM, 0, grid.y0, 0, -grid.cellSizeM]);
    expect(info.bands).toMatchObject([{ type: 'Byte', noDataValue: 0 }]);
    expect(info.coordinateSystem.wkt).toMatch(new RegExp(`${grid.epsg}\\]+$`));
  });
});
