import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { BlockRow } from '../../server/models/BlockRow.ts';
import { FieldPhoto } from '../../server/models/FieldPhoto.ts';
import type { FieldPhotoView } from '../../shared/contracts/fieldPhotos.ts';
import { makeFieldRound, type FieldRoundMade } from './support/makeFieldRound.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';
import { startFiles, type Files } from './support/withFiles.ts';

let app: TestApp;
let files: Files;
let made: FieldRoundMade;

beforeAll(async () => {
  app = await startTestApp();
  files = await startFiles(app);
  made = await makeFieldRound(app, { vines: 4, crew: 2 });
}, 90_000);
afterAll(async () => {
  await files.close();
  await app.close();
});

const segment = (marker: number, content: string) => Buffer.concat([Buffer.from([0xff, marker, 0, content.length + 2]), Buffer.from(content, 'latin1')]);
const picture = Buffer.concat([Buffer.from([0xff, 0xd8]), segment(0xe0, 'JFIF\0'), segment(0xe1, 'Exif\0\0GPS 43.1 N 2.4 E'), segment(0xdb, 'tables'), segment(0xda, 'scan'), Buffer.from([7, 7, 0xff, 0xd9])]);
const base = () => `/api/estates/${made.estateId}/field-photos`;
const facts = (over: object = {}) => ({ id: randomUUID(), blockId: made.blockId, roundId: made.roundId, rowId: made.targets[0]!.rowId, ordinal: made.targets[0]!.ordinal, note: 'Leaves curl', takenAt: '2026-09-01T09:00:00Z', ...over });
const send = (agent: Agent, what: object, bytes: Buffer = picture) => agent.write('post', base()).field('facts', JSON.stringify(what)).attach('files', bytes, 'IMG_0001.jpg');
const list = async (agent: Agent) => ((await agent.get(base())).body as { items: FieldPhotoView[] }).items;

describe('a photo of a vine', () => {
  it('is kept once without place, however often it is sent, and comes back as a picture', async () => {
    const ana = made.crew[0]!.agent;
    const one = facts();
    for (let i = 0; i < 3; i++) expect((await send(ana, one)).status).toBe(201);
    expect(await FieldPhoto.query().resultSize()).toBe(1);
    expect(await list(made.manager)).toMatchObject([{ blockName: 'Long Field', rowLabel: made.targets[0]!.rowLabel, vine: made.targets[0]!.vineNumber, note: 'Leaves curl', person: 'Ana Reed' }]);
    const answer = await made.manager.get(`${base()}/${one.id}`).buffer(true).parse((response, done) => {
      const parts: Buffer[] = [];
      response.on('data', (part: Buffer) => parts.push(part));
      response.on('end', () => done(null, Buffer.concat(parts)));
    });
    expect(answer.headers['content-type']).toBe('image/jpeg');
    expect((answer.body as Buffer).includes('GPS')).toBe(false);
    expect((answer.body as Buffer).includes('tables')).toBe(true);
    expect(files.incoming()).toEqual([]);
  });

  it('of somebody else is not shown to crew', async () => {
    expect(await list(made.crew[1]!.agent)).toEqual([]);
    const [photo] = await list(made.manager);
    expect((await made.crew[1]!.agent.get(`${base()}/${photo!.id}`)).status).toBe(404);
  });

  it('is refused in a sentence when it is no picture or belongs to no round of the sender, and leaves nothing', async () => {
    const before = files.kept().length;
    expect((await send(made.crew[0]!.agent, facts(), Buffer.from('<html>'))).body.code).toBe('noPhoto');
    expect((await send(made.crew[0]!.agent, facts({ roundId: null }))).status).toBe(404);
    expect((await send(made.crew[0]!.agent, facts({ rowId: randomUUID() }))).status).toBe(404);
    expect((await made.crew[0]!.agent.write('post', base()).field('facts', '{').attach('files', picture, 'a.jpg')).body.code).toBe('badFacts');
    expect(files.kept()).toHaveLength(before);
    expect(files.incoming()).toEqual([]);
  });

  it('of a vine that its row does not have is refused by row and last vine, unless the round was sent for it', async () => {
    const [target] = made.targets;
    const row = await BlockRow.query().findById(target!.rowId).throwIfNotFound();
    const answer = await send(made.crew[0]!.agent, facts({ ordinal: row.pieces[0]!.firstVine + row.vineCount }));
    expect(answer.status).toBe(422);
    expect(answer.body).toMatchObject({ code: 'noSuchVine', detail: expect.stringContaining(`Row ${row.label} has vines 1 to ${row.vineCount}`) });
    const { vineCount } = row;
    // The row was shortened while the phone was away.
    await row.$query().patch({ vineCount: target!.ordinal - row.pieces[0]!.firstVine });
    expect((await send(made.crew[0]!.agent, facts())).status).toBe(201);
    expect((await send(made.manager, facts({ roundId: null }))).body.code).toBe('noSuchVine');
    await row.$query().patch({ vineCount });
  });
});
