import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { createBlock } from '../../server/services/blocks/change.ts';
import { BlockRow } from '../../server/models/BlockRow.ts';
import { EntryRestriction } from '../../server/models/EntryRestriction.ts';
import { MailMessage } from '../../server/models/MailMessage.ts';
import { Reading } from '../../server/models/Reading.ts';
import { Vine } from '../../server/models/Vine.ts';
import { newBlock } from '../../shared/contracts/blocks.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

const outline = { type: 'Polygon', coordinates: [[[2.4, 43.1], [2.4018, 43.1], [2.4018, 43.1012], [2.4, 43.1012], [2.4, 43.1]]] };

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let manager: Agent;
let agronomist: Agent;
let blockId: string;
let rows: BlockRow[];

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('Reading test');
  const made = await createBlock({ estateId: estate.estateId, personId: estate.ownerId, roles: ['owner'] }, newBlock.parse({ name: 'Plot', boundary: outline, rowSpacingM: 2.5, vineSpacingM: 1.2 }), new Date('2026-06-01'));
  blockId = made.id;
  rows = await BlockRow.query().where({ blockId }).orderBy('ordinal');
  manager = await app.as((await app.addPerson(estate.estateId, 'manager')).email);
  agronomist = await app.as((await app.addPerson(estate.estateId, 'agronomist', 'Ada Birch')).email);
});
afterAll(() => app.close());
beforeEach(async () => {
  await app.knex.raw('truncate readings, reading_conflicts cascade');
});

const base = () => `/api/estates/${estate.estateId}`;
const reading = (over: Record<string, unknown> = {}) => ({ id: randomUUID(), blockId, rowId: rows[5]!.id, ordinal: 7, measureCode: 'brix', value: 22.4, unit: '°Brix', takenAt: '2026-09-01T08:10:00Z', ...over });
const send = async (agent: Agent, ...readings: object[]) => (await agent.post(`${base()}/readings`, { readings })).body.outcomes as { state: string; reason: string | null }[];

describe('a batch of readings', () => {
  it('may be sent five times and is stored once', async () => {
    const batch = [reading(), reading({ ordinal: 9, value: 23 })];
    for (let i = 0; i < 5; i++) expect((await send(agronomist, ...batch)).map((outcome) => outcome.state)).toEqual(['received', 'received']);
    expect(await Reading.query().resultSize()).toBe(2);
  });

  it('keeps the first when an id comes back with another value', async () => {
    const first = reading();
    await send(agronomist, first);
    const [outcome] = await send(agronomist, { ...first, value: 30 });
    expect(outcome).toMatchObject({ state: 'refused' });
    expect((await Reading.query().findById(first.id))!.value).toBe(22.4);
  });

  it('stores the good lines beside a bad one and says what is wrong with that', async () => {
    const outcomes = await send(agronomist, reading(), reading({ measureCode: 'colour', ordinal: 2 }), reading({ value: 'high', ordinal: 3 }), reading({ unit: 'g/L', ordinal: 4 }), reading({ rowId: null, ordinal: null }));
    expect(outcomes.map((outcome) => outcome.state)).toEqual(['received', 'refused', 'refused', 'refused', 'refused']);
    expect(outcomes[1]!.reason).toMatch(/colour/);
    expect(outcomes[2]!.reason).toMatch(/^value/);
    expect(outcomes[3]!.reason).toMatch(/°Brix/);
    expect(await Reading.query().resultSize()).toBe(1);
  });

  it('refuses a time that no season holds', async () => {
    const [outcome] = await send(agronomist, reading({ takenAt: '1999-09-01T08:10:00Z' }));
    expect(outcome!.reason).toMatch(/1999-09-01/);
  });

  it('flags a device clock that is more than five minutes off and keeps both times', async () => {
    const one = reading({ deviceTime: '2026-09-01T08:10:00Z' });
    await send(agronomist, one);
    const stored = await Reading.query().findById(one.id);
    expect(stored!.flags).toContain('clock');
    expect(stored!.deviceTime!.toISOString()).toBe('2026-09-01T08:10:00.000Z');
  });

  it('keeps two counts of one vine beside each other and opens one conflict', async () => {
    const [a, b] = [reading(), reading({ value: 24.1 })];
    await send(agronomist, a);
    expect((await send(manager, b))[0]!.state).toBe('conflict');
    expect(await Reading.query().resultSize()).toBe(2);
    expect((await send(manager, b))[0]!.state).toBe('conflict');
    const { items } = (await manager.get(`${base()}/conflicts`)).body as { items: { id: string; readingIds: string[] }[] };
    expect(items).toHaveLength(1);
    expect(items[0]!.readingIds.sort()).toEqual([a.id, b.id].sort());
    expect((await manager.post(`${base()}/conflicts/${items[0]!.id}/settle`, { choice: 'keepOne', keptReadingId: a.id })).status).toBe(204);
    expect((await Reading.query().findById(b.id))!.excludedReason).not.toBeNull();
    expect((await manager.post(`${base()}/conflicts/${items[0]!.id}/settle`, { choice: 'bothReal' })).status).toBe(409);
  });

  it('does not call a correction a conflict', async () => {
    const first = reading();
    await send(agronomist, first);
    expect((await send(agronomist, reading({ value: 22.9, supersedes: first.id })))[0]!.state).toBe('received');
  });

  it('takes nothing from crew outside a round of theirs', async () => {
    const crew = await app.as((await app.addPerson(estate.estateId, 'crew')).email);
    expect((await send(crew, reading()))[0]).toMatchObject({ state: 'refused' });
  });

  it('answers with the names the role may see', async () => {
    await send(agronomist, reading());
    const winemaker = await app.as((await app.addPerson(estate.estateId, 'winemaker')).email);
    expect((await winemaker.get(`${base()}/readings?block=${blockId}`)).body.items[0].person).toBe('A. B.');
    expect((await manager.get(`${base()}/readings?block=${blockId}`)).body.items[0].person).toBe('Ada Birch');
  });

  it('turns a missing vine into a mark of the census, proposed where the role may only propose', async () => {
    const finding = { id: randomUUID(), blockId, rowId: rows[8]!.id, ordinal: 4, state: 'missing', notedAt: '2026-09-01T08:10:00Z' };
    const answer = await agronomist.post(`${base()}/readings`, { findings: [finding] });
    expect(answer.body.findings[0].state).toBe('received');
    expect(await Vine.query().findOne({ rowId: rows[8]!.id, ordinal: 4 })).toMatchObject({ state: 'missing', proposed: false });
  });

  it('cannot reach a vine of another estate', async () => {
    const other = await app.addEstate();
    const stranger = await app.as(other.ownerEmail);
    const answer = await stranger.post(`/api/estates/${other.estateId}/readings`, { readings: [reading()] });
    expect(answer.body.outcomes[0].state).toBe('refused');
    expect(await Reading.query().resultSize()).toBe(0);
  });
});

describe('entry restrictions', () => {
  const restriction = () => ({ blockId, startsAt: '2026-09-01T05:00:00Z', endsAt: '2099-09-03T14:00:00Z', product: 'Wettable sulphur', labelInterval: '48 h' });

  it('is set with the interval as typed, told to everybody, and lifted early only with a reason', async () => {
    const made = await manager.post(`${base()}/restrictions`, restriction());
    expect(made.status).toBe(201);
    const mails = await MailMessage.query().where({ kind: 'restriction' });
    expect(mails.length).toBeGreaterThanOrEqual(3);
    expect(mails[0]!.bodyText).toMatch(/48 h/);
    // Whom to ask for lifting it is said by name, in the mail and in the list.
    const { lifters } = (await agronomist.get(`${base()}/restrictions`)).body as { lifters: string[] };
    expect(lifters.length).toBeGreaterThanOrEqual(2);
    for (const name of lifters) expect(mails[0]!.bodyText).toContain(name);
    const { items } = (await manager.get(`${base()}/restrictions?block=${blockId}`)).body as { items: { inForce: boolean }[] };
    expect(items[0]!.inForce).toBe(true);
    expect((await manager.post(`${base()}/restrictions/${made.body.id}/lift`, { reason: '' })).status).toBe(422);
    expect((await agronomist.post(`${base()}/restrictions/${made.body.id}/lift`, { reason: 'Entered by mistake' })).status).toBe(403);
    expect((await manager.post(`${base()}/restrictions/${made.body.id}/lift`, { reason: 'Entered by mistake' })).status).toBe(204);
    expect((await EntryRestriction.query().findById(made.body.id))!.liftedReason).toBe('Entered by mistake');
    // Whoever was told to stay out is told of the lift.
    const lifted = await MailMessage.query().where({ kind: 'restrictionLifted' });
    expect(lifted.map(({ toAddress }) => toAddress).sort()).toEqual(mails.map(({ toAddress }) => toAddress).sort());
    expect(lifted[0]!.bodyText).toMatch(/Entered by mistake[^]*Look at signs and label before you go in/);
  });

  it('refuses an end before its start and a row of another block', async () => {
    expect((await manager.post(`${base()}/restrictions`, { ...restriction(), endsAt: '2026-08-01T05:00:00Z' })).body.errors[0].path).toBe('endsAt');
    expect((await manager.post(`${base()}/restrictions`, { ...restriction(), rowIds: [randomUUID()] })).body.code).toBe('unknownRows');
  });
});

describe('measures', () => {
  it('starts with the common margins of the trade and takes an own measure', async () => {
    const { items } = (await manager.get(`${base()}/measures`)).body as { items: { id: string; code: string; margin: number; confidence: number }[] };
    expect(items.find((item) => item.code === 'brix')).toMatchObject({ margin: 0.5, confidence: 0.95 });
    expect(items.find((item) => item.code === 'clusterWeight')).toMatchObject({ margin: 5, marginKind: 'absolute' });
    const own = { name: 'Seed browning', unit: '%', minimum: 0, maximum: 100, marginKind: 'absolute', margin: 8, spreadKind: 'sd', spreadValue: 15, spreadSource: 'two seasons by eye', typicalMean: 60 };
    expect((await manager.post(`${base()}/measures`, own)).body.code).toBe('own-seed-browning');
    expect((await manager.post(`${base()}/measures`, own)).status).toBe(409);
    const brix = items.find((item) => item.code === 'brix')!;
    expect((await manager.patch(`${base()}/measures/${brix.id}`, { confidence: 0.98 })).body.confidence).toBe(0.98);
    expect((await manager.patch(`${base()}/measures/${brix.id}`, { confidence: 0.97 })).status).toBe(422);
  });
});
