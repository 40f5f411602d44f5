import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { lonLatAt, rectangle } from './support/shapes.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';
import { startFiles, type Files } from './support/withFiles.ts';

/** Rows that somebody surveyed come in as lines with their labels. */

let app: TestApp;
let files: Files;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let agent: Agent;
let block: { id: string };
const base = () => `/api/estates/${estate.estateId}`;

beforeAll(async () => {
  app = await startTestApp();
  files = await startFiles(app);
  estate = await app.addEstate('Measured Rows');
  agent = await app.as((await app.addPerson(estate.estateId, 'agronomist')).email);
  block = (await agent.post(`${base()}/blocks`, { name: 'West', boundary: rectangle(), rowSpacingM: 2.5, vineSpacingM: 1.2, rowBearingDeg: 0 })).body;
});
afterAll(async () => {
  await files.close();
  await app.close();
});

/** Rows that run north every 4 m from x = 2 on, 56 m long; `from` and `to` choose some, `shift` moves them east. */
function rowLines({ from = 1, to = 25, shift = 0, label = (row: number) => `R${row}` as unknown }: { from?: number; to?: number; shift?: number; label?: (row: number) => unknown } = {}): string {
  const features = Array.from({ length: to - from + 1 }, (_, at) => {
    const x = 2 + 4 * (from + at - 1) + shift;
    return { type: 'Feature', properties: { label: label(from + at), length: 56 }, geometry: { type: 'LineString', coordinates: [lonLatAt(x, 2), lonLatAt(x, 58)] } };
  });
  return JSON.stringify({ type: 'FeatureCollection', features });
}

async function bring(name: string, text: string, answers: object) {
  const received = await agent.write('post', `${base()}/imports`).attach('files', Buffer.from(text), name);
  expect(received.status, received.text).toBe(201);
  return agent.patch(`${base()}/imports/${received.body.items[0].id}`, { answers });
}

interface Row {
  id: string;
  ordinal: number;
  label: string;
  labelWas: string | null;
  vineCount: number;
}
const rows = async () => (await agent.get(`${base()}/blocks/${block.id}/rows`)).body.items as Row[];

describe('a file of lines', () => {
  it('asks whether they are rows and which field has their labels', async () => {
    const received = await agent.write('post', `${base()}/imports`).attach('files', Buffer.from(rowLines()), 'rows_west.geojson');
    const [line] = received.body.items;
    expect(line.questions).toMatchObject([{ code: 'purpose', suggestion: 'rows' }]);
    expect(line.questions[0].choices.map((choice: { value: string }) => choice.value)).toEqual(['rows', 'boundary']);
    const next = await agent.patch(`${base()}/imports/${line.id}`, { answers: { purpose: 'rows' } });
    expect(next.body.questions[1]).toMatchObject({ code: 'rowLabelField', suggestion: 'label', answered: false });
    await agent.delete(`${base()}/imports/${line.id}`);
  });

  it('lays the rows where they were surveyed, under their own labels, and says what became of the old ones', async () => {
    const before = await rows();
    const done = await bring('rows.geojson', rowLines(), { purpose: 'rows', rowLabelField: 'label' });
    expect(done.status, done.text).toBe(200);
    expect(done.body).toMatchObject({ state: 'done', layers: [], notes: [{ code: 'rows-laid', params: { count: 25, block: 'West', spacingM: 4 } }] });
    const after = await rows();
    expect(after.map(({ label }) => label)).toEqual(Array.from({ length: 25 }, (_, at) => `R${at + 1}`));
    // 56 m hold 46 vines at 1.2 m with half a spacing kept free at both ends: (56 - 1.2) / 1.2 = 45.7, and the first.
    expect(new Set(after.map(({ vineCount }) => vineCount))).toEqual(new Set([46]));
    const { params } = done.body.notes[0];
    expect(params.kept + params.made).toBe(25);
    expect(params.kept + params.retired).toBe(before.length);
    const view = (await agent.get(`${base()}/blocks/${block.id}`)).body;
    expect([view.rowSpacingM, view.rowCount, view.version]).toEqual([4, 25, 2]);
    expect(Math.min(view.rowBearingDeg, 180 - view.rowBearingDeg)).toBeLessThan(2);
    expect(await AuditEntry.query().findOne({ subjectId: block.id, action: 'rows.import' })).toMatchObject({ before: { rowSpacingM: 2.5 }, after: { rowSpacingM: 4, rowCount: 25 } });
  });

  it('keeps the identity of rows that were surveyed again a little aside, and numbers rows without labels', async () => {
    const before = await rows();
    const done = await bring('again.geojson', rowLines({ shift: 0.3 }), { purpose: 'rows', rowLabelField: null });
    expect(done.body.notes[0].params).toMatchObject({ kept: 25, made: 0, retired: 0 });
    const after = await rows();
    expect(after.map(({ id }) => id)).toEqual(before.map(({ id }) => id));
    expect(after[0]).toMatchObject({ label: '1', labelWas: 'R1' });
  });

  it('does not take labels that two rows share', async () => {
    const done = await bring('twice.geojson', rowLines({ label: (row) => Math.ceil(row / 2) }), { purpose: 'rows', rowLabelField: 'label' });
    expect(done.body.state).toBe('done');
    expect((await rows()).map(({ label }) => label)).toEqual(Array.from({ length: 25 }, (_, at) => String(at + 1)));
  });

  it('too far apart for rows is refused with the distance', async () => {
    const far = JSON.stringify({ type: 'FeatureCollection', features: [10, 40, 70].map((x) => ({ type: 'Feature', properties: null, geometry: { type: 'LineString', coordinates: [lonLatAt(x, 2), lonLatAt(x, 58)] } })) });
    const refused = await bring('roads.geojson', far, { purpose: 'rows' });
    expect(refused.status).toBe(422);
    expect(refused.body.detail).toMatch(/roads\.geojson: Its lines lie 30\.0 m apart; rows of vines lie 0\.5 to 12 m apart\./);
  });

  it('that were surveyed are not built anew by a change of spacing before somebody agrees', async () => {
    const before = await rows();
    const path = `${base()}/blocks/${block.id}`;
    const version = async () => `"${(await agent.get(path)).body.version}"`;
    const asked = await agent.write('patch', path).set('if-match', await version()).send({ rowSpacingM: 2 });
    expect(asked.status).toBe(409);
    expect(asked.body).toMatchObject({ code: 'rowsAtStake', atStake: { surveyed: true, marksLost: 0, referred: 0 } });
    expect(asked.body.detail).toMatch(/surveyed rows would be laid by spacing and bearing/);
    expect(await rows()).toEqual(before);
    expect((await agent.get(path)).body.rowSpacingM).toBe(4);
    expect((await agent.write('patch', path).set('if-match', await version()).send({ notes: 'Drain in the east.' })).status).toBe(200);
    const agreed = await agent.write('patch', path).set('if-match', await version()).send({ rowSpacingM: 2, rowCount: null, rowsMayGo: true });
    expect(agreed.status, agreed.text).toBe(200);
    expect(agreed.body.rowEffects.made).toBeGreaterThan(20);
    // Built rows are asked about no more.
    expect((await agent.write('patch', path).set('if-match', await version()).send({ rowSpacingM: 2.5 })).status).toBe(200);
  });

  it('beside every block changes nothing', async () => {
    const before = await rows();
    const refused = await bring('beside.geojson', rowLines({ shift: 120, to: 6 }), { purpose: 'rows', rowLabelField: 'label' });
    expect(refused.status).toBe(422);
    expect(refused.body.detail).toMatch(/beside\.geojson: (None of its 6 lines lies on a block|It does not cover any of the blocks)/);
    expect(await rows()).toEqual(before);
  });
});
