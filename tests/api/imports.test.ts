import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { decodeFloatCells, decodeLabels } from '../../shared/analysis/cellBytes.ts';
import { Job } from '../../server/models/Job.ts';
import { placeLayerJob } from '../../server/services/imports/placeLayer.ts';
import { writeShapefile } from '../core/importers/writeShapefile.ts';
import { writeTiff } from '../core/importers/writeTiff.ts';
import { jobEnd, startFiles, type Files } from './support/withFiles.ts';
import { lonLatAt, place, rectangle } from './support/shapes.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let files: Files;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let agent: Agent;
let west: { id: string };
let east: { id: string };
const base = () => `/api/estates/${estate.estateId}`;

beforeAll(async () => {
  app = await startTestApp();
  files = await startFiles(app);
  estate = await app.addEstate('Two Fields');
  agent = await app.as((await app.addPerson(estate.estateId, 'agronomist', 'Ada Fell')).email);
  west = (await agent.post(`${base()}/blocks`, { name: 'West', boundary: rectangle() })).body;
  east = (await agent.post(`${base()}/blocks`, { name: 'East', boundary: rectangle({ x: 150 }) })).body;
});
afterAll(async () => {
  await files.close();
  await app.close();
});

interface Sent {
  name: string;
  bytes: Uint8Array | string;
}

async function upload(...sent: Sent[]) {
  const request = agent.write('post', `${base()}/imports`);
  for (const { name, bytes } of sent) request.attach('files', typeof bytes === 'string' ? Buffer.from(bytes) : Buffer.from(bytes), name);
  return request;
}

async function answer(importId: string, answers: object) {
  return agent.patch(`${base()}/imports/${importId}`, { answers });
}

/** Uploads one file, answers everything, waits for its layers. */
async function bring(sent: Sent, answers: object): Promise<{ id: string; state: string; problem: { text: string } | null; layers: { id: string; type: string }[]; [fact: string]: unknown }> {
  const received = await upload(sent);
  expect(received.status, received.text).toBe(201);
  const answered = await answer(received.body.items[0].id, answers);
  expect(answered.status, answered.text).toBe(200);
  expect(answered.body.state, JSON.stringify(answered.body.questions.filter((question: { answered: boolean }) => !question.answered))).toBe('ready');
  await jobEnd(agent, base(), answered.body.jobId);
  return (await agent.get(`${base()}/imports/${received.body.items[0].id}`)).body;
}

/** Pixels of 0.5 m over both blocks and 10 m around. `value` takes metres east and north of the place. */
function picture(value: (x: number, y: number, band: number) => number, plan: Partial<Parameters<typeof writeTiff>[0]> = {}): Uint8Array {
  const [left, top, pixel] = [-10, 70, 0.5];
  return writeTiff({
    width: 540,
    height: 160,
    type: 'f32',
    geo: { epsg: place.epsg, x: place.x + left, y: place.y + top, pixel },
    value: (col, row, band) => value(left + (col + 0.5) * pixel, top - (row + 0.5) * pixel, band),
    ...plan,
  });
}

function asBytes(stream: NodeJS.ReadableStream, done: (error: Error | null, body: Buffer) => void): void {
  const chunks: Buffer[] = [];
  stream.on('data', (chunk: Buffer) => chunks.push(chunk));
  stream.on('end', () => done(null, Buffer.concat(chunks)));
}

async function cellsOf(layerId: string, blockId: string) {
  const response = await agent.get(`${base()}/layers/${layerId}/cells?block=${blockId}`).buffer(true).parse(asBytes as never);
  expect(response.status).toBe(200);
  return { cells: decodeFloatCells(response.body as Uint8Array), grid: JSON.parse(response.headers['x-grid'] as string) as { x0: number; y0: number; cols: number; rows: number; cellSizeM: number; cornersLonLat: [number, number][] } };
}

async function layersOn(blockId: string) {
  return (await agent.get(`${base()}/blocks/${blockId}/layers`)).body.items as { id: string; name: string; type: string; unit: string; coverage: number; readiness: string; findings: { code: string; severity: string; params: Record<string, number>; mark?: number }[]; statistics: { mean: number; min: number; max: number; n: number; histogram: { counts: number[] } }; classes: { value: number; name: string }[] | null; measuredOn: string | null; derivedFrom: string | null; survey: Record<string, unknown> | null }[];
}

describe('a vigour picture', () => {
  it('asks what only a person knows, then lies on every block it covers with the values of the file', async () => {
    // An index that rises to the east by 0.001 a metre: a cell of 2 m at x holds 0.3 + x/1000 exactly, whatever the resampling by area.
    const received = await upload({ name: 'ndvi_20250714.tif', bytes: picture((x) => 0.3 + x / 1000) });
    expect(received.status, received.text).toBe(201);
    const [line] = received.body.items;
    expect(line).toMatchObject({ fileName: 'ndvi_20250714.tif', state: 'asks', uploadedBy: 'Ada Fell', format: 'GeoTIFF', covers: [{ name: 'East', share: 1 }, { name: 'West', share: 1 }] });
    expect(line.understood).toMatchObject({ kind: 'raster', epsg: place.epsg, width: 540, height: 160 });
    expect(line.understood.pixelSizeM).toBeCloseTo(0.5, 2);
    expect(line.questions).toMatchObject([{ code: 'purpose', suggestion: 'vigour', answered: false }]);
    const more = await answer(line.id, { purpose: 'vigour' });
    expect(more.body.questions.map((question: { code: string; suggestion: unknown }) => [question.code, question.suggestion])).toEqual([['purpose', 'vigour'], ['holds', 'ndvi'], ['capturedOn', '2025-07-14'], ['alleys', null], ['growthStage', null]]);
    const ready = await answer(line.id, { holds: 'ndvi', capturedOn: '2025-07-14', alleys: 'mown', growthStage: 'veraison', canopy: 'all' });
    expect(ready.body.state).toBe('ready');
    expect(await jobEnd(agent, base(), ready.body.jobId)).toMatchObject({ state: 'done', result: { blocks: 2 } });
    const done = (await agent.get(`${base()}/imports/${line.id}`)).body;
    expect(done).toMatchObject({ state: 'done', layers: [{ type: 'vigour', name: 'ndvi_20250714' }] });
    for (const [block, offset] of [[west, 0], [east, 150]] as const) {
      const { cells, grid } = await cellsOf(done.layers[0].id, block.id);
      let compared = 0;
      for (let row = 1; row < grid.rows - 1; row++) {
        for (let col = 1; col < grid.cols - 1; col++) {
          const x = grid.x0 + (col + 0.5) * grid.cellSizeM - place.x;
          expect(cells[row * grid.cols + col]).toBeCloseTo(0.3 + x / 1000, 5);
          compared += 1;
        }
      }
      expect(compared).toBeGreaterThan(1000);
      const [nw] = grid.cornersLonLat;
      expect(Math.abs(nw![0] - lonLatAt(offset, 60)[0])).toBeLessThan(3e-5);
      const [layer] = await layersOn(block.id);
      expect(layer).toMatchObject({ type: 'vigour', measuredOn: '2025-07-14', coverage: 1, readiness: 'ready', findings: [{ code: 'cloudUnseen' }] });
      expect(layer!.statistics.mean).toBeCloseTo(0.35 + offset / 1000, 3);
      expect(layer!.statistics.histogram.counts.reduce((sum, count) => sum + count, 0)).toBe(layer!.statistics.n);
    }
  });

  it('makes an index of the bands that a person names', async () => {
    // 8-bit digital numbers: near infrared 45 over red 5 is an NDVI of 0.8, 38 over 9 one of 0.617021277.
    const bytes = picture((x, _y, band) => [11, 5, 45][band]! + (x > 130 ? [0, 4, -7][band]! : 0), { bands: 3, type: 'u8' });
    const done = await bring({ name: 'flight.tif', bytes }, { purpose: 'vigour', value: 'ndvi', redBand: 2, nirBand: 3, capturedOn: null, alleys: 'unknown', growthStage: 'veraison', canopy: 'all' });
    expect(done.state).toBe('done');
    const [layerWest] = (await layersOn(west.id)).filter((layer) => layer.id === done.layers[0]!.id);
    const [layerEast] = (await layersOn(east.id)).filter((layer) => layer.id === done.layers[0]!.id);
    expect(layerWest!.statistics.mean).toBeCloseTo(0.8, 6);
    expect(layerEast!.statistics.mean).toBeCloseTo(0.617021277, 6);
    expect(layerWest!.findings.map((finding) => finding.code)).toEqual(['constant', 'noDate']);
    expect(layerWest!.readiness).toBe('blocked');
  });

  it('refuses a band that the file does not have, and goes on asking', async () => {
    const received = await upload({ name: 'bands.tif', bytes: picture(() => 9, { bands: 2, type: 'u8' }) });
    const { id } = received.body.items[0];
    const wrong = await answer(id, { purpose: 'vigour', value: 'ndvi', redBand: 7 });
    expect(wrong.status).toBe(422);
    expect(wrong.body).toMatchObject({ code: 'answerNotOffered', detail: '"7" is no answer to "redBand". Choose from: 1, 2.' });
    expect((await agent.get(`${base()}/imports/${id}`)).body.state).toBe('asks');
    expect((await answer(id, { purpose: 'boundary' })).body.detail).toMatch(/"boundary" is no answer to "purpose"/);
  });
});

describe('elevation', () => {
  it('in feet gives the same slope and facing as in metres', async () => {
    // A plane that rises 0.2 m a metre to the north: slope 11.309932°, facing south (Horn 1981; gdaldem 3.6.2 agrees).
    const plane = (unit: number) => picture((_x, y) => (300 + 0.2 * y) / unit);
    const metres = await bring({ name: 'dem.tif', bytes: plane(1) }, { purpose: 'elevation', unit: 'm' });
    const feet = await bring({ name: 'dem_feet.tif', bytes: plane(0.3048) }, { purpose: 'elevation', unit: 'ft' });
    expect(metres.layers.map((layer) => layer.type)).toEqual(['elevation', 'slope', 'northness', 'eastness']);
    for (const done of [metres, feet]) {
      const on = await layersOn(west.id);
      const of = (type: string) => on.find((layer) => layer.id === done.layers.find((each) => each.type === type)!.id)!;
      expect(of('elevation').statistics.mean).toBeCloseTo(306, 1);
      expect(of('slope').statistics.mean).toBeCloseTo(11.309932, 3);
      expect(of('northness').statistics.mean).toBeCloseTo(-Math.sin((11.309932 * Math.PI) / 180), 4);
      expect(Math.abs(of('eastness').statistics.mean)).toBeLessThan(1e-4);
      expect(of('slope').derivedFrom).toBe(of('elevation').id);
      expect(of('slope').unit).toBe('°');
    }
    const relief = (await agent.get(`${base()}/relief`)).body;
    const heights = decodeFloatCells(Uint8Array.from(Buffer.from(relief.cells as string, 'base64')));
    expect(heights.length).toBe(relief.columns * relief.rows);
    // The picture is 270 by 80 m: the relief ends where it ends, within a cell.
    expect(Math.abs(relief.columns * relief.cellSizeM - 270)).toBeLessThanOrEqual(2 * relief.cellSizeM);
    expect(Math.abs(relief.rows * relief.cellSizeM - 80)).toBeLessThanOrEqual(2 * relief.cellSizeM);
    const known = heights.filter((height) => !Number.isNaN(height));
    expect(Math.max(...known)).toBeCloseTo(300 + 0.2 * 68, 0);
    expect(known.length).toBeGreaterThan(0.8 * heights.length);
  });
});

describe('what is doubtful about a layer', () => {
  it('half a picture is named by its share and kept out of zoning', async () => {
    // No data in the eastern 40 of 100 m of the west block.
    const bytes = picture((x) => (x > 60 && x < 110 ? -9999 : 0.3 + x / 1000), { noData: '-9999' });
    const done = await bring({ name: 'part_ndvi.tif', bytes }, { purpose: 'vigour', holds: 'ndvi', capturedOn: '2025-07-14', alleys: 'bare', growthStage: 'veraison', canopy: 'all' });
    const layer = (await layersOn(west.id)).find((each) => each.id === done.layers[0]!.id)!;
    expect(layer.coverage).toBeCloseTo(0.6, 2);
    expect(layer.findings[0]).toMatchObject({ code: 'partial', severity: 'red' });
    expect(layer.findings[0]!.params.percent).toBeGreaterThanOrEqual(59);
    expect(layer.readiness).toBe('blocked');
    // The place of the finding: the eastern 40 m, cell by cell.
    const marks = decodeLabels((await agent.get(`${base()}/layers/${layer.id}/marks?block=${west.id}`).buffer(true).parse(asBytes as never)).body as Uint8Array);
    const { cells } = await cellsOf(layer.id, west.id);
    const bit = layer.findings[0]!.mark!;
    const empty = [...cells].filter(Number.isNaN).length;
    expect([...marks].every((mark, cell) => ((mark >> bit) & 1) === 0 || Number.isNaN(cells[cell]))).toBe(true);
    expect([...marks].filter((mark) => ((mark >> bit) & 1) === 1).length).toBeGreaterThan(0.3 * empty);
    const path = `${base()}/layers/${layer.id}/override`;
    expect((await agent.post(path, { blockId: west.id, reason: 'no' })).status).toBe(422);
    expect((await agent.post(path, { blockId: west.id, reason: 'The rest is a farm track.' })).status).toBe(204);
    const [after] = (await layersOn(west.id)).filter((each) => each.id === layer.id);
    expect(after).toMatchObject({ readiness: 'overridden', override: { by: 'Ada Fell', reason: 'The rest is a farm track.' } });
    expect((await agent.post(path, { blockId: east.id, reason: 'Nothing to override here.' })).body.code).toBe('nothingRed');
  });

  it('canopy alone leaves the alleys out, by the index or along the rows of the block', async () => {
    // Rows of the block run north; alleys hold 0.1, every place within 0.5 m of x = 1.25 + 2.5 n holds 0.7.
    const striped = picture((x) => (Math.abs((((x % 2.5) + 2.5) % 2.5) - 1.25) < 0.5 ? 0.7 : 0.1));
    const told = { purpose: 'vigour', holds: 'ndvi', capturedOn: '2025-07-14', alleys: 'mown', growthStage: 'veraison' };
    const meanOf = async (name: string, canopy: string) => {
      const done = await bring({ name, bytes: striped }, { ...told, canopy });
      return (await layersOn(west.id)).find((each) => each.id === done.layers[0]!.id)!;
    };
    const [all, canopy] = [await meanOf('all_ndvi.tif', 'all'), await meanOf('canopy_ndvi.tif', 'threshold')];
    expect(all.statistics.mean).toBeGreaterThan(0.15);
    expect(all.statistics.mean).toBeLessThan(0.4);
    expect(canopy.statistics.mean).toBeCloseTo(0.7, 3);
    expect(canopy.findings).toEqual(expect.arrayContaining([expect.objectContaining({ code: 'canopyOnly', severity: 'note' })]));
    expect(canopy.coverage).toBeCloseTo(1, 2);
    const rows = await meanOf('rows_ndvi.tif', 'rows');
    expect(rows.findings.map((finding) => finding.code)).toContain('canopyByRows');
    expect(rows.statistics.n).toBe(all.statistics.n);
  });

  it('values that an index cannot have are called impossible', async () => {
    const done = await bring({ name: 'bytes_ndvi.tif', bytes: picture((x) => Math.round(100 + x / 4), { type: 'u8' }) }, { purpose: 'vigour', holds: 'ndvi', capturedOn: '2025-07-14', alleys: 'bare', growthStage: 'veraison', canopy: 'all' });
    const layer = (await layersOn(west.id)).find((each) => each.id === done.layers[0]!.id)!;
    expect(layer.findings[0]).toMatchObject({ code: 'impossible', severity: 'red', params: { percent: 100, min: -1, max: 1 } });
  });

  it('naming the day takes the doubt about it away', async () => {
    const done = await bring({ name: 'undated_ndvi.tif', bytes: picture((x) => 0.3 + x / 1000) }, { purpose: 'vigour', holds: 'ndvi', capturedOn: null, alleys: 'bare', growthStage: 'veraison', canopy: 'all' });
    const find = async () => (await layersOn(west.id)).find((each) => each.id === done.layers[0]!.id)!;
    expect(await find()).toMatchObject({ readiness: 'doubt', findings: [{ code: 'noDate' }, { code: 'cloudUnseen' }] });
    expect((await agent.patch(`${base()}/layers/${done.layers[0]!.id}`, { measuredOn: '2025-08-02', name: 'Late July flight' })).status).toBe(204);
    expect(await find()).toMatchObject({ readiness: 'ready', findings: [{ code: 'cloudUnseen' }], name: 'Late July flight', measuredOn: '2025-08-02' });
    await agent.patch(`${base()}/layers/${done.layers[0]!.id}`, { measuredOn: null });
    expect((await find()).findings.map((finding) => finding.code)).toEqual(['noDate', 'cloudUnseen']);
  });
});

describe('soil', () => {
  const soil = (field: string, values: readonly [unknown, unknown]) =>
    JSON.stringify({
      type: 'FeatureCollection',
      features: [
        { type: 'Feature', properties: { [field]: values[0] }, geometry: rectangle({ x: -20, y: -20, width: 80, height: 100 }) },
        { type: 'Feature', properties: { [field]: values[1] }, geometry: rectangle({ x: 60, y: -20, width: 250, height: 100 }) },
      ],
    });

  it('of classes keeps its names, and the legend can be reworded', async () => {
    const done = await bring({ name: 'soil.geojson', bytes: soil('TYPE', ['Loam', 'Clay']) }, { purpose: 'soil', attribute: 'TYPE' });
    const layer = (await layersOn(west.id)).find((each) => each.id === done.layers[0]!.id)!;
    expect(layer).toMatchObject({ type: 'soilClass', classes: [{ value: 0, name: 'Clay' }, { value: 1, name: 'Loam' }], coverage: 1 });
    const shares = (layer.statistics as unknown as { classes: { value: number; share: number }[] }).classes;
    // 60 of the block's 100 m are loam.
    expect(shares.find((entry) => entry.value === 1)!.share).toBeCloseTo(0.6, 2);
    const path = `${base()}/layers/${layer.id}`;
    expect((await agent.patch(path, { classes: [{ value: 0, name: 'Heavy clay', colour: '#886644' }] })).body.code).toBe('otherClasses');
    expect((await agent.patch(path, { classes: [{ value: 0, name: 'Heavy clay', colour: '#886644' }, { value: 1, name: 'Loam', colour: null }] })).status).toBe(204);
    expect((await layersOn(west.id)).find((each) => each.id === layer.id)!.classes![0]).toMatchObject({ name: 'Heavy clay', colour: '#886644' });
    // A soil map is not doubtful for want of a day.
    expect((await agent.patch(path, { measuredOn: null })).status).toBe(204);
    expect((await layersOn(west.id)).find((each) => each.id === layer.id)).toMatchObject({ readiness: 'ready', findings: [] });
    // The class has the same number on the other block, where loam does not occur.
    const { cells } = await cellsOf(layer.id, east.id);
    expect([...new Set(cells.filter((value) => !Number.isNaN(value)))]).toEqual([0]);
  });

  it('of numbers is a mean by area, in the unit that was typed', async () => {
    const done = await bring({ name: 'awc.geojson', bytes: soil('AWC', [80, 120]) }, { purpose: 'soil', attribute: 'AWC', soilAs: 'number', unit: 'mm' });
    const layer = (await layersOn(west.id)).find((each) => each.id === done.layers[0]!.id)!;
    expect(layer).toMatchObject({ type: 'soilNumber', unit: 'mm' });
    // 0.6 · 80 + 0.4 · 120
    expect(layer.statistics.mean).toBeCloseTo(96, 0);
  });
});

describe('conductivity points', () => {
  it('become a layer without the impossible ones, in mS/m, and the trellis is remembered', async () => {
    const lines = ['lon,lat,ec_deep_dS_m'];
    for (let x = 2; x < 100; x += 4) for (let y = 2; y < 60; y += 4) lines.push(`${lonLatAt(x, y).join(',')},${0.2 + x / 1000}`);
    lines.push(`${lonLatAt(50, 31).join(',')},-4`, `${lonLatAt(2, 2).join(',')},9`);
    const received = await upload({ name: 'ec.csv', bytes: lines.join('\n') });
    const [line] = received.body.items;
    expect(line).toMatchObject({ state: 'asks', understood: { kind: 'points', count: lines.length - 1, position: { first: 'lon', second: 'lat' } } });
    const asked = (await answer(line.id, { purpose: 'conductivity' })).body.questions;
    expect(asked.find((question: { code: string }) => question.code === 'attribute').suggestion).toBe('ec_deep_dS_m');
    const withUnit = (await answer(line.id, { attribute: 'ec_deep_dS_m' })).body.questions;
    expect(withUnit.find((question: { code: string }) => question.code === 'unit').suggestion).toBe('dS/m');
    const ready = await answer(line.id, { unit: 'dS/m', capturedOn: '2025-03-01', steelTrellis: 'yes' });
    await jobEnd(agent, base(), ready.body.jobId);
    const { layers } = (await agent.get(`${base()}/imports/${line.id}`)).body;
    const layer = (await layersOn(west.id)).find((each) => each.id === layers[0].id)!;
    expect(layer).toMatchObject({ type: 'conductivity', unit: 'mS/m', readiness: 'doubt' });
    expect(layer.findings.map((finding) => finding.code).sort()).toEqual(['steelTrellis']);
    expect(layer.statistics.mean).toBeCloseTo(25, 0);
    expect(layer.statistics.min).toBeGreaterThan(19);
    expect(layer.survey).toMatchObject({ method: 'kriging', setAside: [{ reason: 'impossible', count: 1 }, { reason: 'samePlace', count: 1 }], taken: [] });
    const { items } = (await agent.get(`${base()}/layers/${layer.id}/aside?block=${west.id}`)).body;
    expect(items.map((each: { reason: string }) => each.reason)).toEqual(['impossible', 'samePlace']);
    expect(items[0].lonLat[0]).toBeCloseTo(lonLatAt(50, 31)[0]!, 6);
    // What was set aside counts again when a person says so, and the surface is made anew.
    const again = await agent.put(`${base()}/layers/${layer.id}/cleaning`, { taken: ['impossible', 'spike'] });
    expect(again.status).toBe(202);
    await jobEnd(agent, base(), again.body.jobId);
    const remade = (await layersOn(west.id)).find((each) => each.id === layer.id)!;
    expect(remade.survey).toMatchObject({ setAside: [{ reason: 'samePlace', count: 1 }], taken: ['impossible', 'spike'] });
    expect(remade.statistics.min).toBeLessThan(layer.statistics.min!);
    expect(await layersOn(east.id)).not.toContainEqual(expect.objectContaining({ id: layer.id, coverage: 1 }));
  });
});

describe('outlines', () => {
  const field = (name: string, x: number) => ({ type: 'Feature', properties: { nombre: name }, geometry: rectangle({ x, y: 200 }) });

  it('are offered with names and become blocks together', async () => {
    const received = await upload({ name: 'blocks.geojson', bytes: JSON.stringify({ type: 'FeatureCollection', features: [field('Loma Alta', 0), field('Cañada', 150)] }) });
    const [line] = received.body.items;
    expect(line.questions[0]).toMatchObject({ code: 'purpose', suggestion: 'boundary' });
    const offered = (await answer(line.id, { purpose: 'boundary', nameField: 'nombre' })).body;
    expect(offered).toMatchObject({ state: 'ready', outlines: [{ index: 0, name: 'Loma Alta', problem: null }, { index: 1, name: 'Cañada', problem: null }] });
    expect(offered.outlines[0].areaHa).toBeCloseTo(0.6, 3);
    expect(offered.outlines[0].mainDirectionDeg).toBeCloseTo(90.8, 0);
    const made = await agent.post(`${base()}/imports/${line.id}/blocks`, { blocks: [{ outline: 0, name: 'Loma Alta', variety: 'Tempranillo', rowBearingDeg: 90.8 }, { outline: 1, name: 'Cañada' }] });
    expect(made.status, made.text).toBe(201);
    const names = (await agent.get(`${base()}/blocks`)).body.items.map((block: { name: string }) => block.name);
    expect(names).toEqual(expect.arrayContaining(['Loma Alta', 'Cañada']));
    expect((await agent.get(`${base()}/imports/${line.id}`)).body.state).toBe('done');
    expect((await agent.post(`${base()}/imports/${line.id}/blocks`, { blocks: [{ outline: 0, name: 'Twice' }] })).status).toBe(409);
  });

  it('become all blocks or none', async () => {
    const received = await upload({ name: 'more.geojson', bytes: JSON.stringify({ type: 'FeatureCollection', features: [field('A', 300), field('B', 450)] }) });
    const { id } = received.body.items[0];
    await answer(id, { purpose: 'boundary', nameField: null });
    const before = (await agent.get(`${base()}/blocks`)).body.total;
    const clash = await agent.post(`${base()}/imports/${id}/blocks`, { blocks: [{ outline: 0, name: 'New One' }, { outline: 1, name: 'West' }] });
    expect(clash.status).toBe(409);
    expect(clash.body.detail).toMatch(/West/);
    expect((await agent.get(`${base()}/blocks`)).body.total).toBe(before);
    expect((await agent.get(`${base()}/imports/${id}`)).body.state).toBe('ready');
  });

  it('that cross themselves are offered as they would be repaired, with the place', async () => {
    const bow = [[0, 400], [100, 460], [100, 400], [0, 460], [0, 400]].map(([x, y]) => lonLatAt(x!, y!));
    const received = await upload({ name: 'bow.geojson', bytes: JSON.stringify({ type: 'Feature', properties: {}, geometry: { type: 'Polygon', coordinates: [bow] } }) });
    const { id } = received.body.items[0];
    const [outline] = (await answer(id, { purpose: 'boundary' })).body.outlines;
    expect(outline.problem.code).toBe('outlineCrosses');
    expect(outline.place[0]).toBeCloseTo(lonLatAt(50, 430)[0], 5);
    expect((await agent.post(`${base()}/imports/${id}/blocks`, { blocks: [{ outline: 0, name: 'Bow' }] })).body.code).toBe('outlineCrosses');
    // Two triangles of 50 by 60 m: 0.3 ha together.
    expect(outline.repair.areaAfterHa).toBeCloseTo(0.3, 2);
    expect((await agent.post(`${base()}/imports/${id}/blocks`, { blocks: [{ outline: 0, repaired: true, name: 'Bow' }] })).status).toBe(201);
  });
});

describe('what was received', () => {
  it('comes back byte for byte, under its own name', async () => {
    const bytes = picture((x) => 0.3 + x / 1000);
    const received = await upload({ name: 'vigueur été.tif', bytes });
    const [line] = received.body.items;
    expect(line.fileName).toBe('vigueur été.tif');
    expect(line.sha256).toBe(createHash('sha256').update(bytes).digest('hex'));
    const back = await agent.get(`${base()}/files/${line.fileId}/download`).buffer(true).parse((stream, done) => {
      const chunks: Buffer[] = [];
      stream.on('data', (chunk: Buffer) => chunks.push(chunk));
      stream.on('end', () => done(null, Buffer.concat(chunks)));
    });
    expect(Buffer.compare(back.body as Buffer, Buffer.from(bytes))).toBe(0);
    expect(back.headers['content-disposition']).toContain("filename*=UTF-8''vigueur%20%C3%A9t%C3%A9.tif");
    expect(files.incoming()).toEqual([]);
  });

  it('is one line a file, good ones beside refused ones', async () => {
    const received = await upload({ name: 'good_ndvi.tif', bytes: picture((x) => 0.4 + x / 1000) }, { name: 'bad.tif', bytes: 'no picture at all' });
    expect(received.status).toBe(201);
    expect(received.body.items.map((item: { state: string }) => item.state)).toEqual(['asks', 'refused']);
    expect(received.body.items[1]).toMatchObject({ fileId: null, problem: { code: 'wrong-type' } });
  });


  it('takes the loose parts of a shapefile as one file, and keeps each by its hash', async () => {
    const corner = (x: number, y: number) => [...lonLatAt(x, y)];
    const parts = writeShapefile({ records: [[[corner(0, 0), corner(0, 90), corner(90, 90), corner(90, 0), corner(0, 0)]]], rows: [['Long Acre']] });
    const prj = 'GEOGCS["GCS_WGS_1984",DATUM["D_WGS_1984",SPHEROID["WGS_1984",6378137.0,298.257223563]],PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]]';
    const received = await upload({ name: 'acre.dbf', bytes: parts.dbf }, { name: 'acre.shp', bytes: parts.shp }, { name: 'ACRE.shx', bytes: parts.shx }, { name: 'acre.prj', bytes: prj });
    expect(received.status, received.text).toBe(201);
    expect(received.body.items).toHaveLength(1);
    const [line] = received.body.items;
    expect(line).toMatchObject({ fileName: 'acre.zip', state: 'asks', format: 'shapes' });
    expect(line.parts.map(({ name }: { name: string }) => name)).toEqual(['acre.shp', 'acre.dbf', 'ACRE.shx', 'acre.prj']);
    expect(line.parts[0].sha256).toBe(createHash('sha256').update(parts.shp).digest('hex'));
    const zip = await agent.get(`${base()}/files/${line.fileId}/download`);
    expect(zip.status).toBe(200);
    expect(createHash('sha256').update(zip.body).digest('hex')).toBe(line.sha256);
    const again = await upload({ name: 'acre.dbf', bytes: parts.dbf }, { name: 'acre.shp', bytes: parts.shp }, { name: 'ACRE.shx', bytes: parts.shx }, { name: 'acre.prj', bytes: prj });
    expect(again.body.items[0].sha256).toBe(line.sha256);
  });

  it('refuses the parts of a shapefile without its shapes once', async () => {
    const parts = writeShapefile({ records: [[[[0, 0], [0, 1], [1, 1], [0, 0]]]] });
    const received = await upload({ name: 'acre.dbf', bytes: parts.dbf }, { name: 'acre.shx', bytes: parts.shx });
    expect(received.status).toBe(422);
    expect(received.body.items).toHaveLength(1);
    expect(received.body.items[0].problem).toMatchObject({ code: 'missing-part', params: { why: 'no-shp' } });
  });

  it('a mask beside the picture takes out what it covers', async () => {
    const mask = writeTiff({ width: 540, height: 160, type: 'u8', geo: null, value: (col) => (-10 + (col + 0.5) / 2 < 50 ? 0 : 255) });
    const received = await upload({ name: 'masked.tif', bytes: picture((x) => 0.3 + x / 1000) }, { name: 'masked.tif.msk', bytes: mask });
    expect(received.status, received.text).toBe(201);
    expect(received.body.items).toHaveLength(1);
    const answered = await answer(received.body.items[0].id, { purpose: 'soil', soilAs: 'number' });
    expect(answered.body.state).toBe('ready');
    await jobEnd(agent, base(), answered.body.jobId);
    const { layers } = (await agent.get(`${base()}/imports/${received.body.items[0].id}`)).body;
    const { cells, grid } = await cellsOf(layers[0].id, west.id);
    let [masked, seen] = [0, 0];
    cells.forEach((value, cell) => {
      const x = grid.x0 + ((cell % grid.cols) + 0.5) * grid.cellSizeM - place.x;
      if (x < 49) masked += Number.isNaN(value) ? 1 : 0;
      if (x < 49) expect(value).toBeNaN();
      else if (x > 51 && !Number.isNaN(value)) seen += 1;
    });
    expect(masked).toBeGreaterThan(500);
    expect(seen).toBeGreaterThan(500);
  });

  it('a world file and a projection file place the picture they came with', async () => {
    const bytes = picture((x) => 0.3 + x / 1000, { geo: null });
    const world = [0.5, 0, 0, -0.5, place.x - 10 + 0.25, place.y + 70 - 0.25].join('\n');
    const wkt = 'PROJCS["WGS 84 / UTM zone 30N",GEOGCS["WGS 84",DATUM["WGS_1984",SPHEROID["WGS 84",6378137,298.257223563]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433]],PROJECTION["Transverse_Mercator"],PARAMETER["latitude_of_origin",0],PARAMETER["central_meridian",-3],PARAMETER["scale_factor",0.9996],PARAMETER["false_easting",500000],PARAMETER["false_northing",0],UNIT["metre",1],AUTHORITY["EPSG","32630"]]';
    const received = await upload({ name: 'old_ndvi.tif', bytes }, { name: 'old_ndvi.tfw', bytes: world }, { name: 'old_ndvi.prj', bytes: wkt });
    expect(received.body.items).toHaveLength(1);
    expect(received.body.items[0]).toMatchObject({ state: 'asks', covers: [{ name: 'East' }, { name: 'West' }] });
  });

  it('a picture without a reference system is asked about with places on the map, and the answer places it', async () => {
    const bytes = picture((x) => 0.3 + x / 1000, { geo: { x: place.x - 10, y: place.y + 70, pixel: 0.5, keys: [] } });
    const [line] = (await upload({ name: 'lost_ndvi.tif', bytes })).body.items;
    const question = line.questions[0];
    expect(question).toMatchObject({ code: 'reference', answered: false });
    const choice = question.choices.find((each: { value: number }) => each.value === place.epsg);
    expect(choice.distanceKm).toBeLessThan(1);
    expect(choice.outlineLonLat.length).toBeGreaterThan(3);
    expect((await answer(line.id, { reference: 999999 })).status).toBe(422);
    const placed = (await answer(line.id, { reference: place.epsg })).body;
    expect(placed.understood.epsg).toBe(place.epsg);
    expect(placed.questions.slice(0, 2)).toMatchObject([{ code: 'reference', answered: true, answer: place.epsg }, { code: 'purpose', answered: false }]);
  });

  it('layers move with the block: a changed outline places them again', async () => {
    const block = (await agent.post(`${base()}/blocks`, { name: 'Moving', boundary: rectangle({ x: 150, y: 0, width: 60 }) })).body;
    expect(await jobEnd(agent, base(), block.jobId)).toMatchObject({ state: 'done' });
    const before = await layersOn(block.id);
    expect(before.length).toBeGreaterThan(5);
    const changed = await agent.write('patch', `${base()}/blocks/${block.id}`).set('if-match', '"1"').send({ cellSizeM: 4 });
    expect(changed.body.jobId).not.toBeNull();
    expect(await jobEnd(agent, base(), changed.body.jobId)).toMatchObject({ state: 'done' });
    const after = await layersOn(block.id);
    expect(after.map((layer) => layer.id).sort()).toEqual(before.map((layer) => layer.id).sort());
    expect(after.every((layer) => layer.readiness !== 'stale')).toBe(true);
    const { grid } = await cellsOf(after[0]!.id, block.id);
    expect(grid.cellSizeM).toBe(4);
  });

  it('a retired layer is gone from every block, with what was derived from it', async () => {
    const done = await bring({ name: 'gone_dem.tif', bytes: picture((_x, y) => 200 + y) }, { purpose: 'elevation', unit: 'm' });
    expect((await agent.delete(`${base()}/layers/${done.layers[0]!.id}`)).status).toBe(204);
    const left = (await layersOn(west.id)).map((layer) => layer.id);
    for (const layer of done.layers) expect(left).not.toContain(layer.id);
    expect((await agent.get(`${base()}/layers/${done.layers[0]!.id}/cells?block=${west.id}`)).status).toBe(404);
  });

  it('a job that runs once more, as after a crash, leaves one set of layers', async () => {
    const done = await bring({ name: 'twice_dem.tif', bytes: picture((_x, y) => 200 + y) }, { purpose: 'elevation', unit: 'm' });
    const job = await Job.query().findOne({ subjectId: done.id, kind: 'placeLayer' }).throwIfNotFound();
    const again = (await placeLayerJob.work({ job, report: () => Promise.resolve() })) as { layerIds: string[]; blocks: number };
    expect(again.layerIds.sort()).toEqual(done.layers.map((layer) => layer.id).sort());
    expect(again.blocks).toBe((job.result as { blocks: number }).blocks);
    const now = (await agent.get(`${base()}/imports/${done.id}`)).body;
    expect(now.layers).toHaveLength(4);
  });

  it('a dismissed line leaves the desk, what was made of it stays', async () => {
    const done = await bring({ name: 'kept_ndvi.tif', bytes: picture((x) => 0.3 + x / 1000) }, { purpose: 'vigour', holds: 'ndvi', capturedOn: '2025-07-14', alleys: 'bare', growthStage: 'veraison', canopy: 'all' });
    expect((await agent.delete(`${base()}/imports/${done.id}`)).status).toBe(204);
    expect((await agent.get(`${base()}/imports`)).body.items.map((item: { id: string }) => item.id)).not.toContain(done.id);
    expect((await layersOn(west.id)).map((layer) => layer.id)).toContain(done.layers[0]!.id);
  });
});

describe('real pictures', () => {
  /** Area and means at cell centres of five census tracts, computed with OGR/GDAL 3.6.2 and numpy on the original pixels. */
  const tracts = {
    332: { m2: 898_840.37, ndvi: 0.27308, dem: 37.12 },
    333: { m2: 474_100.59, ndvi: 0.26762, dem: 47.9 },
    334: { m2: 985_636.03, ndvi: 0.26086, dem: 40.86 },
    338: { m2: 1_262_684.76, ndvi: 0.25973, dem: 47.77 },
    341: { m2: 516_894.79, ndvi: 0.16632, dem: 45.15 },
  };

  it('areas, NDVI of Landsat digital numbers and elevation agree with GDAL, five blocks from one file each', async () => {
    const real = await app.addEstate('Olinda');
    const owner = await app.as(real.ownerEmail);
    const path = `/api/estates/${real.estateId}`;
    const attach = async (name: string) => (await owner.write('post', `${path}/imports`).attach('files', readFileSync(`tests/fixtures/rasters/${name}`), name)).body.items[0];
    const place = async (importId: string, answers: object) => {
      const { body } = await owner.patch(`${path}/imports/${importId}`, { answers });
      expect(body.state, JSON.stringify(body)).toBe('ready');
      expect(await jobEnd(owner, path, body.jobId)).toMatchObject({ state: 'done', result: { blocks: 5 } });
    };
    const shapes = await attach('tracts.shp.zip');
    const { outlines } = (await owner.patch(`${path}/imports/${shapes.id}`, { answers: { purpose: 'boundary', nameField: 'tract' } })).body;
    await owner.post(`${path}/imports/${shapes.id}/blocks`, { blocks: outlines.map(({ index, name }: { index: number; name: string }) => ({ outline: index, name, cellSizeM: 10, rowSpacingM: 12, vineSpacingM: 12 })) });
    const picture = await attach('l7_red_nir.tif');
    await place(picture.id, { purpose: 'vigour', value: 'ndvi', redBand: 1, nirBand: 2, capturedOn: null, alleys: 'unknown', growthStage: 'unknown' });
    await place((await attach('dem.tif')).id, { purpose: 'elevation', unit: 'm' });
    const blocks = (await owner.get(`${path}/blocks`)).body.items as { id: string; name: string; areaHa: number }[];
    expect(blocks.map((block) => block.name)).toEqual(Object.keys(tracts));
    for (const block of blocks) {
      const expected = tracts[block.name as unknown as keyof typeof tracts];
      expect(Math.abs(block.areaHa * 10_000 - expected.m2) / expected.m2).toBeLessThan(1e-5);
      const on = (await owner.get(`${path}/blocks/${block.id}/layers`)).body.items as { type: string; statistics: { mean: number }; coverage: number }[];
      // Cells of 10 m share pixels of 28.5 m across the outline, the reference takes whole pixels: means differ in the third digit.
      expect(Math.abs(on.find((layer) => layer.type === 'vigour')!.statistics.mean - expected.ndvi)).toBeLessThan(0.004);
      expect(Math.abs(on.find((layer) => layer.type === 'elevation')!.statistics.mean - expected.dem)).toBeLessThan(0.3);
      expect(on.every((layer) => layer.coverage > 0.99)).toBe(true);
    }
  });
});
