import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { labelCode } from '../../shared/field/labelCode.ts';
import { makeStripBlock, type StripBlock } from './support/makeStripBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';
import { startFiles, type Files } from './support/withFiles.ts';

/** Text that PostgreSQL keeps nowhere: NUL it refuses, half of a surrogate pair it refuses in JSON and turns into another sign elsewhere. */
let app: TestApp;
let files: Files;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let block: StripBlock;
let owner: Agent;
beforeAll(async () => {
  app = await startTestApp();
  files = await startFiles(app);
  estate = await app.addEstate('Hard Words');
  block = await makeStripBlock(estate);
  owner = await app.as(estate.ownerEmail);
});
afterAll(async () => {
  await files.close();
  await app.close();
});
const base = () => `/api/estates/${estate.estateId}`;

describe.each([['NUL', '\0'], ['half of a pair', '\ud800']])('text with %s', (_kind, sign) => {
  it('is refused in a name, by the field, in the language of the page', async () => {
    const { status, body } = await owner.write('patch', `${base()}/blocks/${block.blockId}`).set('if-match', '"1"').set('accept-language', 'it').send({ name: `Bank${sign}` });
    expect([status, body.code, body.errors[0].path]).toEqual([422, 'badInput', 'name']);
    expect(body.detail).toMatch(/^name: Il testo contiene un carattere/);
  });

  it('is refused deep inside, as a name of a field, and in the address', async () => {
    const make = async (input: object) => (await owner.post(`${base()}/blocks`, input)).body.errors as { path: string }[];
    expect((await make({ name: 'Sound', notes: [{ by: `x${sign}` }] })).map(({ path }) => path)).toEqual(['notes.0.by']);
    expect((await make({ name: 'Sound', extra: { [`k${sign}`]: 1 } })).map(({ path }) => path)).toEqual(['extra']);
    if (sign === '\0') expect((await owner.get(`${base()}/search?q=a%00b`)).body.errors[0].path).toBe('q');
  });

  it('holds back its own bag only', async () => {
    const bag = (over: object) => ({ id: randomUUID(), blockId: block.blockId, vines: [{ rowId: block.rows[2]!.id, ordinal: 4 }], berries: 100, wet: false, closedAt: '2026-09-01T07:41:00Z', ...over });
    const answer = await owner.post(`${base()}/bags`, { bags: [bag({ code: labelCode(1), note: `wet${sign}` }), bag({ code: labelCode(sign === '\0' ? 2 : 3) })] });
    expect(answer.status).toBe(200);
    expect((answer.body.outcomes as { state: string }[]).map(({ state }) => state)).toEqual(['refused', 'received']);
    expect(answer.body.outcomes[0].reason).toMatch(/^note: The text holds a character/);
  });
});

it('takes an emoji, which is a whole pair', async () => {
  const { status } = await owner.write('patch', `${base()}/blocks/${block.blockId}`).set('if-match', '"1"').send({ name: 'Bank 🍇' });
  expect(status).toBeLessThan(300);
});

it('refuses nesting without end in words', async () => {
  const answer = await owner.write('post', `${base()}/blocks`).set('content-type', 'application/json').send(`{"name":${'['.repeat(400_000)}${']'.repeat(400_000)}}`);
  expect(answer.status).toBe(422);
});

it('names a file that has NUL in its name', async () => {
  const body = `--xx\r\ncontent-disposition: form-data; name="files"; filename*=utf-8''a%00b.csv\r\ncontent-type: text/csv\r\n\r\na,b\r\n--xx--\r\n`;
  const answer = await owner.write('post', `${base()}/imports`).set('content-type', 'multipart/form-data; boundary=xx').send(body);
  expect([answer.status, answer.body.errors?.[0].path]).toEqual([422, 'filename']);
});

it('refuses a large file whose name has NUL before any of it is sent', async () => {
  const name = Buffer.from('a\0b.csv').toString('base64');
  const answer = await owner.write('post', `${base()}/imports/pieces`).set({ 'tus-resumable': '1.0.0', 'upload-length': '10', 'upload-metadata': `filename ${name}` });
  expect(answer.status).toBe(422);
  expect(answer.text).toContain('Rename the file');
});

it.each([['NUL', '\\u0000'], ['half of a pair', '\\ud800']])('reads a file of outlines whose names hold %s, without it', async (_kind, sign) => {
  const ring = [[4.6, 43.9], [4.605, 43.9], [4.605, 43.904], [4.6, 43.904], [4.6, 43.9]];
  const text = `{"type":"FeatureCollection","features":[{"type":"Feature","properties":{"name":"Bank${sign}x","k${sign}":"v${sign}"},"geometry":${JSON.stringify({ type: 'Polygon', coordinates: [ring] })}}]}`;
  const answer = await owner.write('post', `${base()}/imports`).attach('files', Buffer.from(text), 'outlines.geojson');
  expect(answer.status).toBe(201);
  expect(answer.body.items[0].understood.layers[0].fields[0].examples).toEqual([sign === '\\u0000' ? 'Bankx' : 'Bank\ufffdx']);
});
