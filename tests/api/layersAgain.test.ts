import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { up as placeOlderLayers } from '../../migrations/017_marks_of_older_layers.ts';
import { BlockLayer } from '../../server/models/BlockLayer.ts';
import { Job } from '../../server/models/Job.ts';
import { writeTiff } from '../core/importers/writeTiff.ts';
import { place, rectangle } from './support/shapes.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';
import { jobEnd, startFiles, type Files } from './support/withFiles.ts';

/** Layers that are placed anew from their files keep what people said about them. */

let app: TestApp;
let files: Files;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let agent: Agent;
let block: { id: string };
let layerId: string;
const base = () => `/api/estates/${estate.estateId}`;

beforeAll(async () => {
  app = await startTestApp();
  files = await startFiles(app);
  estate = await app.addEstate('Twice Laid');
  agent = await app.as((await app.addPerson(estate.estateId, 'agronomist', 'Ada Fell')).email);
  block = (await agent.post(`${base()}/blocks`, { name: 'West', boundary: rectangle() })).body;
  // Nothing was measured from 60 m east on: 60 % of the block is covered.
  const bytes = writeTiff({ width: 240, height: 160, type: 'f32', noData: '-9999', geo: { epsg: place.epsg, x: place.x - 10, y: place.y + 70, pixel: 0.5 }, value: (col) => (col > 140 ? -9999 : 0.3 + col / 1000) });
  const received = await agent.write('post', `${base()}/imports`).attach('files', Buffer.from(bytes), 'part_ndvi.tif');
  const answered = await agent.patch(`${base()}/imports/${received.body.items[0].id}`, { answers: { purpose: 'vigour', holds: 'ndvi', capturedOn: null, alleys: 'bare', growthStage: 'veraison', canopy: 'all' } });
  await jobEnd(agent, base(), answered.body.jobId);
  layerId = (await layer()).id;
});
afterAll(async () => {
  await files.close();
  await app.close();
});

interface Layer {
  id: string;
  readiness: string;
  measuredOn: string | null;
  override: { by: string; reason: string } | null;
  findings: { code: string; severity: string; mark?: number; params: Record<string, unknown> }[];
}

async function layer(): Promise<Layer> {
  return ((await agent.get(`${base()}/blocks/${block.id}/layers`)).body.items as Layer[])[0]!;
}

/** A new outline makes a new grid; layers follow in the background. */
async function redraw(shape: Parameters<typeof rectangle>[0]): Promise<Layer> {
  const { headers } = await agent.get(`${base()}/blocks/${block.id}`);
  const changed = await agent.write('patch', `${base()}/blocks/${block.id}`).set('if-match', headers.etag as string).send({ boundary: rectangle(shape) });
  expect(changed.status, changed.text).toBe(200);
  expect((await jobEnd(agent, base(), changed.body.jobId)).state).toBe('done');
  return layer();
}

describe('a layer that somebody answers for', () => {
  it('keeps name and reason while the same finding stops it, and a day that was named afterwards', async () => {
    const path = `${base()}/layers/${layerId}/override`;
    expect((await agent.post(path, { blockId: block.id, reason: 'The rest is a farm track.' })).status).toBe(204);
    await agent.patch(`${base()}/layers/${layerId}`, { measuredOn: '2025-07-14' });
    const again = await redraw({ width: 98 });
    expect(again).toMatchObject({ readiness: 'overridden', override: { by: 'Ada Fell', reason: 'The rest is a farm track.' }, measuredOn: '2025-07-14' });
    expect(again.findings.map(({ code }) => code)).toEqual(['partial', 'cloudUnseen']);
  });

  it('is stopped again when much less of it is covered, and says who had answered', async () => {
    const again = await redraw({ width: 150 });
    expect(again).toMatchObject({ readiness: 'blocked', override: null });
    expect(again.findings).toContainEqual({ code: 'overrideLapsed', severity: 'note', params: { who: 'Ada Fell', reason: 'The rest is a farm track.' } });
    expect((await redraw({ width: 152 })).findings.map(({ code }) => code)).toContain('overrideLapsed');
    await agent.post(`${base()}/layers/${layerId}/override`, { blockId: block.id, reason: 'Only the west is planted.' });
    const answered = await layer();
    expect(answered).toMatchObject({ readiness: 'overridden', override: { reason: 'Only the west is planted.' } });
    expect(answered.findings.map(({ code }) => code)).not.toContain('overrideLapsed');
  });

  it('needs nobody any more where nothing stops it', async () => {
    expect(await redraw({ width: 50 })).toMatchObject({ readiness: 'ready', override: null });
  });
});

it('findings of older layers get their places when the schema is brought up to date', async () => {
  const before = await redraw({ width: 100 });
  const bare = before.findings.map(({ mark: _, ...finding }) => finding);
  await BlockLayer.query().where({ layerId }).patch({ marks: null, findings: bare as never });
  expect((await layer()).findings[0]!.mark).toBeUndefined();
  await placeOlderLayers(app.knex);
  const job = await Job.query().where({ subjectType: 'layer', subjectId: layerId }).first().throwIfNotFound();
  expect((await jobEnd(agent, base(), job.id)).state).toBe('done');
  expect((await layer()).findings).toEqual(before.findings);
  // Run once more, it finds nothing to do.
  await placeOlderLayers(app.knex);
  expect(await Job.query().where({ subjectType: 'layer', subjectId: layerId }).resultSize()).toBe(1);
});
