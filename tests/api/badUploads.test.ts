import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { writeShapefile } from '../core/importers/writeShapefile.ts';
import { writeTiff } from '../core/importers/writeTiff.ts';
import { patchEntries, writeZip } from '../core/importers/writeZip.ts';
import { StoredFile } from '../../server/models/StoredFile.ts';
import { roles, type Role } from '../../shared/catalog/roles.ts';
import { may, type Permission, type Reach } from '../../shared/catalog/permissions.ts';
import { lonLatAt, place, rectangle } from './support/shapes.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';
import { jobEnd, startFiles, type Files } from './support/withFiles.ts';

let app: TestApp;
let files: Files;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let agent: Agent;
let block: { id: string };
const base = () => `/api/estates/${estate.estateId}`;

beforeAll(async () => {
  app = await startTestApp({ UPLOAD_LIMIT_MB: '2' });
  files = await startFiles(app);
  estate = await app.addEstate('Hard Ground');
  agent = await app.as((await app.addPerson(estate.estateId, 'agronomist')).email);
  block = (await agent.post(`${base()}/blocks`, { name: 'Stone Piece', boundary: rectangle() })).body;
});
afterAll(async () => {
  await files.close();
  await app.close();
});

const picture = (plan: Partial<Parameters<typeof writeTiff>[0]> = {}) =>
  writeTiff({ width: 60, height: 40, type: 'f32', geo: { epsg: place.epsg, x: place.x - 10, y: place.y + 70, pixel: 2 }, value: (col, row) => 0.2 + (col + row) / 200, ...plan });

const square = rectangle().coordinates[0]!;
const shapes = writeShapefile({ records: [[square]] });
const wgs84 = 'GEOGCS["WGS 84",DATUM["WGS_1984",SPHEROID["WGS 84",6378137,298.257223563]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433],AUTHORITY["EPSG","4326"]]';
const collection = (...rings: (readonly (readonly number[])[])[]) => JSON.stringify({ type: 'FeatureCollection', features: rings.map((ring) => ({ type: 'Feature', properties: { name: 'A' }, geometry: { type: 'Polygon', coordinates: [ring] } })) });

function upload(name: string, bytes: Uint8Array | string) {
  return agent.write('post', `${base()}/imports`).attach('files', Buffer.from(bytes), name);
}

/** Everything that an upload could leave behind. */
async function left() {
  const count = async (table: string) => Number(((await app.knex(table).where({ estateId: estate.estateId }).count('* as n')) as { n: number }[])[0]!.n);
  return { kept: files.kept().length, incoming: files.incoming().length, files: await count('files'), layers: await count('layers'), blocks: await count('blocks'), jobs: await count('jobs') };
}

describe('a file that cannot be used is refused in one sentence and leaves nothing', () => {
  let before: Awaited<ReturnType<typeof left>>;
  beforeEach(async () => void (before = await left()));
  afterEach(async () => expect(await left()).toEqual(before));

  const zipBomb = () => {
    const honest = writeZip({ 'soil.shp': 'x', 'soil.dbf': 'x', 'soil.shx': 'x' });
    return patchEntries(honest, (view, index) => index === 0 && view.setUint32(24, 2 ** 31, true));
  };
  const hugeRatio = () => writeZip({ 'soil.shp': new Uint8Array(80 * 2 ** 20), 'soil.dbf': 'x', 'soil.shx': 'x' });

  const cases: [what: string, name: string, bytes: () => Uint8Array | string, code: string, words: RegExp][] = [
    ['an empty file', 'empty.tif', () => '', 'empty', /empty\.tif: The file is empty\. Export or copy it again/],
    ['a picture cut off in its header', 'cut.tif', () => picture().slice(0, 6), 'truncated', /cut\.tif: The file has 6 bytes\. Copy or export it again/],
    ['a picture cut off in its pixels', 'short.tif', () => writeTiff({ width: 60, height: 40, type: 'f32', geo: { epsg: place.epsg, x: place.x, y: place.y, pixel: 2 }, tags: { 279: [40_000_000] } }), 'truncated', /short\.tif/],
    ['a PNG named as a TIFF', 'photo.tif', () => new Uint8Array([0x89, 0x50, 0x4e, 0x47, 13, 10, 26, 10, 0, 0, 0, 0]), 'wrong-type', /It is a PNG picture\. Send a GeoTIFF/],
    ['a web page named as GeoJSON', 'outline.geojson', () => '<!doctype html><html><body>Please sign in</body></html>', 'wrong-type', /a web page/],
    ['a program', 'setup.zip', () => new Uint8Array([0x4d, 0x5a, 0x90, 0, 3, 0, 0, 0]), 'wrong-type', /a Windows program/],
    ['a spreadsheet', 'readings.xlsx', () => writeZip({ '[Content_Types].xml': '<Types/>', 'xl/workbook.xml': '<workbook/>' }), 'wrong-type', /office document/],
    ['random bytes', 'noise.bin', () => Uint8Array.from({ length: 4000 }, (_, i) => (i * 7919 + (i % 13) * 31) % 256), 'wrong-type', /noise\.bin/],
    ['a picture without a place', 'plain.tif', () => picture({ geo: null }), 'no-placement', /no map coordinates/],
    ['a picture 300 km away', 'far.tif', () => picture({ geo: { epsg: 32631, x: 430_000, y: 4_707_000, pixel: 2 } }), 'not-overlapping', /far\.tif: It does not cover any of the blocks: the nearest is \d+ km away\. Check/],
    ['a picture next door', 'near.tif', () => picture({ geo: { epsg: place.epsg, x: place.x + 900, y: place.y, pixel: 2 } }), 'not-overlapping', /nearest is 0\.8 km away/],
    ['a picture of no data only', 'void.tif', () => picture({ value: () => -9999, noData: '-9999' }), 'no-values', /every pixel is marked as missing/],
    ['a zip with a path upwards', 'evil.zip', () => writeZip({ '../../etc/soil.shp': shapes.shp, '../../etc/soil.shx': shapes.shx, '../../etc/soil.dbf': shapes.dbf }), 'unsafe-archive', /evil\.zip/],
    ['a zip that unpacks to eighty megabytes of nothing', 'bomb.zip', hugeRatio, 'unsafe-archive', /bomb\.zip/],
    ['a zip that lies about its sizes', 'lies.zip', zipBomb, 'unsafe-archive', /lies\.zip/],
    ['a zip cut off', 'half.zip', () => writeZip({ 'a.shp': shapes.shp, 'a.shx': shapes.shx, 'a.dbf': shapes.dbf }).slice(0, 80), 'damaged', /half\.zip/],
    ['a shapefile without its shapes', 'noshp.zip', () => writeZip({ 'a.shx': shapes.shx, 'a.dbf': shapes.dbf }), 'missing-part', /no \.shp/],
    ['a single part of a shapefile', 'alone.shp', () => shapes.shp, 'missing-part', /Send all parts with the same name together, or packed into one ZIP/],
    ['GeoJSON that is no JSON', 'broken.geojson', () => '{"type":"FeatureCollection","features":[', 'damaged', /broken\.geojson/],
    ['GeoJSON without shapes', 'none.geojson', () => '{"type":"FeatureCollection","features":[]}', 'no-layer', /no shapes/],
    ['a table of positions without a measurement', 'posts.csv', () => `lat,lon,note\n${[10, 20].map((x) => [...lonLatAt(x, x)].reverse().join(',')).map((at) => `${at},post`).join('\n')}\n`, 'no-values', /posts\.csv: It holds points without a number to map \(it has note\)\. Add a column/],
    ['a table without positions', 'lab.csv', () => 'sample;brix\nA;21\nB;22\n', 'no-coordinates', /latitude and longitude/],
  ];

  it.each(cases)('%s', async (_what, name, bytes, code, words) => {
    const answer = await upload(name, bytes());
    expect(answer.status, answer.text).toBe(422);
    expect(answer.type).toBe('application/problem+json');
    expect(answer.body.code, answer.body.detail).toBe(code);
    expect(answer.body.detail).toMatch(words);
    expect(answer.body.items).toMatchObject([{ fileName: name, fileId: null, state: 'refused', problem: { code } }]);
    const line = (await agent.get(`${base()}/imports/${answer.body.items[0].id}`)).body;
    expect(line).toMatchObject({ state: 'refused', problem: { code }, questions: [] });
    expect((await agent.patch(`${base()}/imports/${line.id}`, { answers: { purpose: 'vigour' } })).status).toBe(409);
  });

  it('a file over the limit', async () => {
    const answer = await upload('large.tif', new Uint8Array(3 * 2 ** 20));
    expect(answer.status).toBe(422);
    expect(answer.body).toMatchObject({ code: 'fileTooLarge', detail: expect.stringContaining('larger than this server accepts') });
  });

  it('a request without files, and one in another field', async () => {
    expect((await agent.post(`${base()}/imports`)).body.code).toBe('noFiles');
    const other = await agent.write('post', `${base()}/imports`).attach('upload', Buffer.from('x'), 'x.tif');
    expect(other.status).toBe(422);
    expect(other.body.detail).toMatch(/field "files"/);
    expect((await agent.post(`${base()}/imports`, { files: ['x'] })).status).toBe(422);
  });

  it.each([
    ['with a path', '../../../etc/passwd.tif', 'passwd.tif'],
    ['with a drive', 'C:\\fields\\north.tif', 'north.tif'],
    ['with a turned direction', 'gnp\u202Efit.tif', 'gnpfit.tif'],
    ['of a reserved word', 'con.tif', 'con.tif'],
    ['of four thousand letters', `${'ü'.repeat(4000)}.tif`, `${'ü'.repeat(60)}…${'ü'.repeat(12)}.tif`],
  ])('a name %s is only a name', async (_what, name, shown) => {
    const answer = await upload(name, 'text of no kind');
    expect(answer.status).toBe(422);
    expect(answer.body.items[0].fileName).toBe(shown);
  });
});

describe('a file that is doubtful is asked about, never guessed', () => {
  it('points on one line lie on the block that they cross', async () => {
    const lines = Array.from({ length: 12 }, (_, i) => `${lonLatAt(5, 30)[1]},${lonLatAt(5 + 6 * i, 30)[0]},${20 + i}`);
    const answer = await upload('one_line.csv', ['lat,lon,ec', ...lines].join('\n'));
    expect(answer.status, answer.text).toBe(201);
    expect(answer.body.items[0].covers).toMatchObject([{ name: 'Stone Piece' }]);
    const sample = answer.body.items[0].understood.sampleLonLat as [number, number][];
    expect(sample).toHaveLength(12);
    expect(sample[0]![0]).toBeCloseTo(lonLatAt(5, 30)[0], 6);
  });

  it('a self-crossing soil shape is repaired in sight, with the place', async () => {
    const bow = [[0, 0], [100, 60], [100, 0], [0, 60], [0, 0]].map(([x, y]) => lonLatAt(x!, y!));
    const answer = await upload('soil_bow.geojson', collection(bow));
    expect(answer.status, answer.text).toBe(201);
    expect(answer.body.items[0].notes).toEqual(expect.arrayContaining([expect.objectContaining({ code: 'shapes-cross', text: expect.stringMatching(/crosses itself, the first near 42\.5\d+, -1\.8\d+/) })]));
  });

  it('a shapefile without its table has outlines and nothing to measure', async () => {
    const answer = await upload('nodbf.zip', writeZip({ 'a.shp': shapes.shp, 'a.shx': shapes.shx, 'a.prj': wgs84 }));
    const [line] = answer.body.items;
    expect(line.notes.map((note: { text: string }) => note.text).join(' ')).toMatch(/\.dbf/);
    expect(line.questions[0].choices.map((choice: { value: string }) => choice.value)).toEqual(['boundary']);
  });

  it('a shapefile without its index is read all the same', async () => {
    const answer = await upload('noshx.zip', writeZip({ 'a.shp': shapes.shp, 'a.dbf': shapes.dbf, 'a.prj': wgs84 }));
    expect(answer.body.items[0], answer.text).toMatchObject({ state: 'asks', understood: { layers: [{ count: 1 }] } });
  });

  it('a scribble among soil shapes is left out, and said so', async () => {
    let state = 3;
    const random = () => (state = (state * 48_271) % 2_147_483_647) / 2_147_483_647;
    const scribble = Array.from({ length: 400 }, () => lonLatAt(100 * random(), 60 * random()));
    const answer = await upload('scribble.geojson', collection([...scribble, scribble[0]!], square as [number, number][]));
    expect(answer.status, answer.text).toBe(201);
    expect(answer.body.items[0].notes).toEqual(expect.arrayContaining([expect.objectContaining({ code: 'shapes-tangled', params: expect.objectContaining({ shapes: 1 }) })]));
    expect(JSON.stringify(answer.body)).not.toMatch(/NaN|null ha/);
  });

  it('a shapefile without a projection file', async () => {
    const metres = [[0, 0], [100, 0], [100, 60], [0, 60], [0, 0]].map(([x, y]) => [place.x + x!, place.y + y!]);
    const parts = writeShapefile({ records: [[metres]] });
    const answer = await upload('noprj.zip', writeZip({ 'a.shp': parts.shp, 'a.shx': parts.shx, 'a.dbf': parts.dbf }));
    expect(answer.body.items[0].questions[0]).toMatchObject({ code: 'reference', answered: false });
    expect(answer.body.items[0].questions[0].choices.map((choice: { value: number }) => choice.value)).toContain(place.epsg);
  });

  it('values of -9999 that nothing marks as missing', async () => {
    const answer = await upload('unmarked.tif', picture({ value: (col) => (col < 20 ? -9999 : 0.5 + col / 1000) }));
    const question = answer.body.items[0].questions.find((each: { code: string }) => each.code === 'noData');
    expect(question.choices.map((choice: { value: number | null }) => choice.value)).toEqual([-9999, null]);
    const after = await agent.patch(`${base()}/imports/${answer.body.items[0].id}`, { answers: { noData: -9999 } });
    expect(after.body.questions.find((each: { code: string }) => each.code === 'noData')).toMatchObject({ answered: true, answer: -9999 });
  });

  it('latitude and longitude in the wrong order', async () => {
    const lines = ['a,b,ec', ...Array.from({ length: 40 }, (_, i) => `${lonLatAt(i * 2, i).reverse().join(',')},${20 + i}`)];
    const answer = await upload('swapped.csv', lines.join('\n'));
    expect(answer.status, answer.text).toBe(201);
    const { id, questions } = answer.body.items[0];
    expect(questions.map((each: { code: string }) => each.code)).toEqual(['xColumn', 'yColumn']);
    const columns = await agent.patch(`${base()}/imports/${id}`, { answers: { xColumn: 'a', yColumn: 'b' } });
    const swap = columns.body.questions.find((each: { code: string }) => each.code === 'swapAxes');
    expect(swap, JSON.stringify(columns.body.questions)).toMatchObject({ answered: false });
    // Both answers come with the positions as they would lie: the right one on the block, reading by reading.
    const sample = swap.choices.find((choice: { value: boolean }) => choice.value).sampleLonLat as [number, number][];
    expect(sample).toHaveLength(40);
    expect(sample[10]![0]).toBeCloseTo(lonLatAt(20, 10)[0], 5);
    expect(sample[10]![1]).toBeCloseTo(lonLatAt(20, 10)[1], 5);
    const swapped = await agent.patch(`${base()}/imports/${id}`, { answers: { swapAxes: true } });
    expect(swapped.body.covers).toMatchObject([{ name: 'Stone Piece' }]);
    expect(swapped.body.questions.find((each: { code: string }) => each.code === 'swapAxes').choices[0].sampleLonLat).toBeUndefined();
  });

  it('a layer that turns out to have no values on the blocks is refused with the reason, and can be answered anew', async () => {
    // Two bands, the first empty over the block.
    const answer = await upload('two.tif', picture({ bands: 2, value: (col, row, band) => (band === 0 ? (col === 0 ? 1 : -9999) : 30 + row), noData: '-9999' }));
    const { id } = answer.body.items[0];
    const first = await agent.patch(`${base()}/imports/${id}`, { answers: { purpose: 'conductivity', band: 1, unit: 'mS/m', capturedOn: null, steelTrellis: 'no' } });
    expect(await jobEnd(agent, base(), first.body.jobId)).toMatchObject({ state: 'failed', problem: expect.stringMatching(/no values/) });
    expect((await agent.get(`${base()}/imports/${id}`)).body).toMatchObject({ state: 'refused', problem: { code: 'no-values' } });
    expect((await agent.get(`${base()}/blocks/${block.id}/layers`)).body.total).toBe(0);
    const second = await agent.patch(`${base()}/imports/${id}`, { answers: { band: 2 } });
    expect(second.body).toMatchObject({ state: 'ready', problem: null });
    expect(await jobEnd(agent, base(), second.body.jobId)).toMatchObject({ state: 'done' });
    expect((await agent.get(`${base()}/blocks/${block.id}/layers`)).body.total).toBe(1);
    expect((await agent.patch(`${base()}/imports/${id}`, { answers: { band: 1 } })).status).toBe(409);
  });

  it('text with characters that a database cannot hold', async () => {
    const answer = await upload('odd.geojson', JSON.stringify({ type: 'FeatureCollection', features: [{ type: 'Feature', properties: { 'na\u0000me': 'Lo\u0000w \ud800 field' }, geometry: rectangle() }] }));
    expect(answer.status, answer.text).toBe(201);
    expect(answer.body.items[0].understood.layers[0].fields[0].name).toBe('name');
  });

  it('a picture sent before there are blocks waits for them, and is placed once there is one', async () => {
    const other = await app.addEstate('New Ground');
    const owner = await app.as(other.ownerEmail);
    const otherBase = `/api/estates/${other.estateId}`;
    const sent = await owner.write('post', `${otherBase}/imports`).attach('files', Buffer.from(picture()), 'early_ndvi.tif');
    expect(sent.status, sent.text).toBe(201);
    const { id, notes } = sent.body.items[0];
    expect(notes).toEqual([expect.objectContaining({ code: 'waits-for-block' })]);
    const answers = { purpose: 'vigour', holds: 'ndvi', capturedOn: null, alleys: 'bare', growthStage: 'unknown', canopy: 'all' };
    const tooEarly = await owner.patch(`${otherBase}/imports/${id}`, { answers });
    expect([tooEarly.status, tooEarly.body.detail]).toEqual([422, expect.stringMatching(/no blocks yet.*Make a block first/)]);
    const made = await owner.post(`${otherBase}/blocks`, { name: 'First Piece', boundary: rectangle() });
    const placed = await owner.patch(`${otherBase}/imports/${id}`, { answers });
    expect(placed.body).toMatchObject({ state: 'ready', notes: [] });
    expect(await jobEnd(owner, otherBase, placed.body.jobId)).toMatchObject({ state: 'done' });
    expect((await owner.get(`${otherBase}/blocks/${made.body.id}/layers`)).body.total).toBe(1);
  });
});

describe('answers that cannot be used change nothing', () => {
  it.each([
    [{ purpose: 'wine' }, /purpose/],
    [{ capturedOn: '31/12/2025' }, /capturedOn/],
    [{ band: 0 }, /band/],
    ['no object', /answers/],
  ])('%j', async (answers, words) => {
    const { id } = (await upload('asked_ndvi.tif', picture())).body.items[0];
    const answer = await agent.patch(`${base()}/imports/${id}`, { answers });
    expect(answer.status).toBe(422);
    expect(answer.body.detail).toMatch(words);
    expect((await agent.get(`${base()}/imports/${id}`)).body.state).toBe('asks');
  });
});

describe('who may', () => {
  const byRole = new Map<Role, Agent>();
  let stranger: Agent;
  let strangersEstate: string;
  beforeAll(async () => {
    for (const role of roles) byRole.set(role, await app.as((await app.addPerson(estate.estateId, role)).email));
    const other = await app.addEstate();
    strangersEstate = other.estateId;
    stranger = await app.as(other.ownerEmail);
  });

  const acts: [string, Permission, Reach, (ids: { importId: string; layerId: string; fileId: string }) => [method: 'get' | 'post' | 'patch' | 'delete', path: string, body?: object]][] = [
    ['see the import desk', 'layers.import', 'read', () => ['get', '/imports']],
    ['see one import', 'layers.import', 'read', ({ importId }) => ['get', `/imports/${importId}`]],
    ['send files', 'layers.import', 'do', () => ['post', '/imports']],
    ['answer', 'layers.import', 'do', ({ importId }) => ['patch', `/imports/${importId}`, {}]],
    ['take outlines', 'blocks.edit', 'do', ({ importId }) => ['post', `/imports/${importId}/blocks`, {}]],
    ['dismiss a line', 'layers.import', 'do', () => ['delete', '/imports/6c1d0a4e-3a2b-4c55-8f6e-0b6a4c1d2e3f']],
    ['fetch an original', 'layers.import', 'read', ({ fileId }) => ['get', `/files/${fileId}/download`]],
    ['see layers', 'estate.see', 'read', () => ['get', `/blocks/${block.id}/layers`]],
    ['see cells', 'estate.see', 'read', ({ layerId }) => ['get', `/layers/${layerId}/cells?block=${block.id}`]],
    ['change a layer', 'layers.import', 'do', ({ layerId }) => ['patch', `/layers/${layerId}`, {}]],
    ['override a finding', 'layers.override', 'do', ({ layerId }) => ['post', `/layers/${layerId}/override`, {}]],
    ['retire a layer', 'layers.import', 'do', () => ['delete', '/layers/6c1d0a4e-3a2b-4c55-8f6e-0b6a4c1d2e3f']],
  ];
  let ids: { importId: string; layerId: string; fileId: string };
  beforeAll(async () => {
    const { id } = (await upload('rights_ndvi.tif', picture())).body.items[0];
    const answered = await agent.patch(`${base()}/imports/${id}`, { answers: { purpose: 'vigour', holds: 'ndvi', capturedOn: null, alleys: 'bare', growthStage: 'unknown', canopy: 'all' } });
    await jobEnd(agent, base(), answered.body.jobId);
    const line = (await agent.get(`${base()}/imports/${id}`)).body;
    ids = { importId: id, layerId: line.layers[0].id, fileId: line.fileId };
  });

  it.each(acts)('%s: every role as the matrix says, and strangers find nothing', async (_what, permission, atLeast, act) => {
    const [method, path, body] = act(ids);
    for (const [role, one] of byRole) {
      const { status } = await (method === 'get' ? one.get(`${base()}${path}`) : one[method](`${base()}${path}`, body));
      expect([role, status === 403]).toEqual([role, !may([role], permission, atLeast)]);
      expect(status).toBeLessThan(500);
    }
    expect((await (method === 'get' ? stranger.get(`${base()}${path}`) : stranger[method](`${base()}${path}`, body))).status).toBe(404);
    const own = `/api/estates/${strangersEstate}${path}`;
    // The ids of one estate are not found in another, whatever the rights there.
    if (/[0-9a-f]{8}-/.test(path)) expect([404, 422]).toContain((await (method === 'get' ? stranger.get(own) : stranger[method](own, body))).status);
  });

  it('ids of another estate are not found with complete requests either', async () => {
    const there = `/api/estates/${strangersEstate}`;
    expect((await stranger.patch(`${there}/imports/${ids.importId}`, { answers: { purpose: 'vigour' } })).status).toBe(404);
    expect((await stranger.post(`${there}/imports/${ids.importId}/blocks`, { blocks: [{ outline: 0, name: 'X' }] })).status).toBe(404);
    expect((await stranger.patch(`${there}/layers/${ids.layerId}`, { name: 'Mine' })).status).toBe(404);
    expect((await stranger.post(`${there}/layers/${ids.layerId}/override`, { blockId: block.id, reason: 'because I say so' })).status).toBe(404);
    expect((await stranger.delete(`${there}/layers/${ids.layerId}`)).status).toBe(404);
    expect((await stranger.delete(`${there}/imports/${ids.importId}`)).status).toBe(404);
    expect(await StoredFile.query().where({ id: ids.fileId }).resultSize()).toBe(1);
  });
});

