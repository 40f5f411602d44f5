import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { EntryRestriction } from '../../server/models/EntryRestriction.ts';
import type { LotsBoard } from '../../shared/contracts/lots.ts';
import type { NoticeView } from '../../shared/contracts/notices.ts';
import type { RipeningView } from '../../shared/contracts/results.ts';
import type { ReviewView, TicketView } from '../../shared/contracts/tickets.ts';
import { makeZonedBlock, type ZonedBlock } from './support/makeZonedBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let winemaker: Agent;
let crew: { id: string; email: string };
let block: ZonedBlock;
let lotId: string;

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('Harvest test');
  block = await makeZonedBlock({ estateId: estate.estateId, personId: estate.ownerId }, { name: 'West Plot' });
  winemaker = await app.as((await app.addPerson(estate.estateId, 'winemaker')).email);
  crew = await app.addPerson(estate.estateId, 'crew', 'Picker');
});
afterAll(() => app.close());

const base = () => `/api/estates/${estate.estateId}`;

/** Readings of a zone, one vine each; `from` shifts the vines, so that visits may read the same ones or others. */
async function read(zone: number, day: string, values: number[], from = 0): Promise<void> {
  const vines = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === zone);
  const readings = values.map((value, index) => {
    const vine = vines[100 + from + index * 37]!;
    return { id: randomUUID(), blockId: block.blockId, rowId: block.ground.stored[block.ground.vines.row[vine]!]!.id, ordinal: block.ground.vines.ordinal[vine], measureCode: 'brix', value, unit: '°Brix', takenAt: `${day}T08:00:00Z` };
  });
  const answer = await winemaker.post(`${base()}/readings`, { readings });
  expect(answer.body.outcomes.map((outcome: { state: string }) => outcome.state)).toEqual(values.map(() => 'received'));
}

const ripening = async () => (await winemaker.get(`${base()}/blocks/${block.blockId}/ripening`)).body as RipeningView;
const board = async () => (await winemaker.get(`${base()}/lots`)).body as LotsBoard;
const lot = async () => (await board()).lots.find((one) => one.id === lotId)!;
const notices = async (agent: Agent = winemaker) => (await agent.get(`${base()}/notices`)).body.items as NoticeView[];

describe('ripening of a block', () => {
  it('compares two visits to the same vines in pairs', async () => {
    // Six vines read twice; computed with R 4.2.2, t.test(paired = TRUE): 0.75, 95 % 0.513004 to 0.986996.
    await read(1, '2026-09-01', [21.2, 22.0, 20.8, 22.5, 21.7, 22.1]);
    await read(1, '2026-09-08', [22.0, 22.6, 21.9, 23.1, 22.2, 23.0]);
    const series = (await ripening()).series.find((one) => one.zone === 1 && one.measure === 'brix')!;
    expect(series.change).toMatchObject({ from: '2026-09-01', sameVines: true, word: 'higher' });
    expect(series.change!.value).toBeCloseTo(0.75, 10);
    expect(series.change!.halfWidth).toBeCloseTo(0.986996 - 0.75, 5);
  });

  it('gives no forecast from two visits', async () => {
    const series = (await ripening()).series.find((one) => one.zone === 1)!;
    expect(series.trend).toMatchObject({ kind: 'refused', reason: 'fewVisits', visits: 2, needed: 3 });
    expect(series.forecast).toEqual([]);
  });

  it('calls a difference between other vines no change while it cannot be told', async () => {
    await read(2, '2026-09-01', [20.1, 23.9, 22.0, 24.4]);
    await read(2, '2026-09-08', [22.4, 24.0, 21.1, 23.8], 11);
    const series = (await ripening()).series.find((one) => one.zone === 2)!;
    expect(series.change).toMatchObject({ sameVines: false, word: 'notDistinguishable' });
  });

  it('draws a straight line through three visits and a band beyond the last', async () => {
    await read(1, '2026-09-15', [23.1, 23.2, 22.8, 24.1, 23.0, 23.9], 11);
    const series = (await ripening()).series.find((one) => one.zone === 1)!;
    if (series.trend.kind !== 'trend') throw new Error('no trend');
    const means = [130.3 / 6, 134.8 / 6, 140.1 / 6];
    // Least squares over three days a week apart: the slope is half the rise from first to last, per 7 days.
    expect(series.trend.slope).toBeCloseTo((means[2]! - means[0]!) / 14, 10);
    expect(series.forecast.length).toBe(8);
    expect(series.forecast.at(-1)!.upper - series.forecast.at(-1)!.lower).toBeGreaterThan(series.forecast[0]!.upper - series.forecast[0]!.lower);
  });

  it('says so when a block has no zones in force', async () => {
    expect((await winemaker.get(`${base()}/blocks/${randomUUID()}/ripening`)).status).toBe(404);
  });
});

describe('a pick notice', () => {
  const send = (over: object = {}) => winemaker.post(`${base()}/lots/${lotId}/notices`, { people: [crew.id], fromTime: '06:00', ...over });
  const change = async (facts: object) => winemaker.write('patch', `${base()}/lots/${lotId}`).set('if-match', `"${(await lot()).version}"`).send(facts);

  it('is refused until the lot is confirmed', async () => {
    lotId = (await winemaker.post(`${base()}/lots`, { name: 'Shelf red', pickOn: '2026-09-25' })).body.id as string;
    await winemaker.write('put', `${base()}/lots/${lotId}/parts`).set('if-match', '"1"').send({ parts: [{ zoneId: block.zoneIds[0] }] });
    const answer = await send();
    expect(answer.status).toBe(422);
    expect(answer.body.detail).toMatch(/Confirm the lot "Shelf red"/);
  });

  it('gets number 1, a mail and a place in the reader’s list, without tonnes for the crew', async () => {
    await winemaker.write('post', `${base()}/lots/${lotId}/confirm`).set('if-match', `"${(await lot()).version}"`);
    expect((await send()).body.number).toBe(1);
    const picker = await app.as(crew.email);
    const [own] = await notices(picker);
    expect(own).toMatchObject({ number: 1, mine: true, voidAt: null });
    expect(own!.body.tonnes).toBeNull();
    expect((await notices())[0]!.body.tonnes!.value).toBeGreaterThan(0);
    const mails = (await (await app.as(estate.ownerEmail)).get(`${base()}/mail`)).body.items as { to: string; text: string; kind: string }[];
    const mail = mails.find((one) => one.kind === 'pickNotice')!;
    expect(mail.to).toBe(crew.email);
    expect(mail.text).toMatch(/West Plot zone 1/);
    expect(mail.text).not.toMatch(/Expected|Estimate/);
  });

  it('shows who has read it', async () => {
    const picker = await app.as(crew.email);
    const [own] = await notices(picker);
    expect((await picker.post(`${base()}/notices/${own!.id}/read`)).status).toBe(204);
    expect((await notices())[0]!.readers).toMatchObject([{ name: 'Picker' }]);
    expect((await notices())[0]!.readers[0]!.readAt).not.toBeNull();
    expect((await winemaker.post(`${base()}/notices/${own!.id}/read`)).status).toBe(404);
  });

  it('is replaced by the next number with the differences first, and is void from then on', async () => {
    await change({ pickOn: '2026-09-26' });
    expect((await send()).body.number).toBe(2);
    const [second, first] = await notices();
    expect(second).toMatchObject({ number: 2, replacesNumber: 1, voidAt: null, differences: [{ what: 'pickOn', before: '2026-09-25', after: '2026-09-26' }] });
    expect(first).toMatchObject({ number: 1, replacedBy: 2 });
    expect(first!.voidAt).not.toBeNull();
  });

  it('is stopped by a pre-harvest interval that was set since', async () => {
    await EntryRestriction.query().insert({ estateId: estate.estateId, blockId: block.blockId, startsAt: new Date('2026-09-20'), endsAt: new Date('2026-09-21'), product: 'Sulphur', labelInterval: '10 days', noPickBefore: '2026-09-30', setBy: estate.ownerId });
    const answer = await send();
    expect(answer.status).toBe(409);
    expect(answer.body.detail).toMatch(/Sulphur.*2026-09-30/);
    expect(await notices()).toHaveLength(2);
  });

  it('goes to people of the estate only', async () => {
    const other = await app.addEstate();
    const stranger = await app.addPerson(other.estateId, 'crew');
    expect((await send({ people: [stranger.id] })).status).toBe(422);
    expect((await send({ people: [] })).status).toBe(422);
  });
});

describe('scale tickets', () => {
  const enter = (over: object = {}) => winemaker.post(`${base()}/tickets`, { lotId, ticketNo: '4711', gross: 9200, tare: 3100, weighedAt: '2026-09-26T09:00:00Z', ...over });
  const tickets = async () => (await winemaker.get(`${base()}/tickets`)).body.items as TicketView[];
  const review = async () => (await winemaker.get(`${base()}/review`)).body as ReviewView;

  it('keep the net weight, and mark the lot as picked', async () => {
    expect((await enter()).status).toBe(201);
    expect((await tickets())[0]).toMatchObject({ ticketNo: '4711', netKg: 6100, corrects: null });
    expect((await lot()).state).toBe('picked');
  });

  it('are entered once, with the tare below the gross', async () => {
    expect((await enter()).status).toBe(409);
    const swapped = await enter({ ticketNo: '4712', gross: 3100, tare: 9200 });
    expect(swapped.status).toBe(422);
    expect(swapped.body.detail).toMatch(/tare/);
  });

  it('keep their total when they are split', async () => {
    const split = [{ blockId: block.blockId, zoneNumber: 1, kg: 4000, how: 'measured' }, { blockId: block.blockId, zoneNumber: null, kg: 2000, how: 'shared' }];
    const answer = await enter({ ticketNo: '4713', split });
    expect(answer.status).toBe(422);
    expect(answer.body.detail).toMatch(/6000 kg.*6100 kg/);
    expect((await enter({ ticketNo: '4713', split: [{ ...split[0], kg: 4100 }, split[1]] })).status).toBe(201);
  });

  it('are corrected by a counter-record, never changed', async () => {
    const wrong = (await tickets()).find((ticket) => ticket.ticketNo === '4713')!;
    expect((await enter({ ticketNo: '4713 c', gross: 5000, tare: 3000, corrects: wrong.id })).status).toBe(422);
    expect((await enter({ ticketNo: '4713 c', gross: 5000, tare: 3000, corrects: wrong.id, note: 'Read off the wrong line' })).status).toBe(201);
    expect((await enter({ ticketNo: '4713 d', corrects: wrong.id, note: 'Again' })).status).toBe(409);
    const after = await tickets();
    expect(after.find((ticket) => ticket.id === wrong.id)).toMatchObject({ netKg: 6100 });
    expect((await review()).lots[0]!.actualT).toBeCloseTo(8.1, 9);
  });

  it('take pounds and short tons as they are printed', async () => {
    await enter({ ticketNo: '4714', gross: 2, tare: 1, unit: 'shortTon' });
    // NIST SP 811: one short ton is 907.18474 kg.
    expect((await tickets()).find((ticket) => ticket.ticketNo === '4714')!.netKg).toBeCloseTo(907.18474, 6);
  });

  it('are held against the forecast of the first notice', async () => {
    const { lots, summary } = await review();
    expect(lots[0]).toMatchObject({ lotName: 'Shelf red', tickets: 3 });
    expect(lots[0]!.forecastOn).not.toBeNull();
    expect(summary).toMatchObject({ n: 1, few: true });
    expect(summary.bias).toBeCloseTo(lots[0]!.actualT! - lots[0]!.forecast!.value, 9);
  });
});

describe('the season’s question whether zones mattered', () => {
  it('keeps zones only where the fruit differed by more than luck', async () => {
    await read(1, '2026-09-20', [24.0, 24.2, 23.8, 24.1, 23.9], 3);
    await read(2, '2026-09-20', [21.0, 21.2, 20.8, 21.1, 20.9], 3);
    const [answer] = ((await winemaker.get(`${base()}/review`)).body as ReviewView).blocks;
    // R 4.2.2, aov(): F = 900 on 1 and 8 degrees of freedom, p = 1.653526e-09.
    expect(answer).toMatchObject({ blockName: 'West Plot', zones: 2, verdict: 'keep' });
    expect(answer!.measures[0]!.p! / 1.653526e-9).toBeCloseTo(1, 5);
  });
});
