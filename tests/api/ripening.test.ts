import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeComputePool, openComputePool } from '../../server/workers/computePool.ts';
import { ScaleTicket } from '../../server/models/ScaleTicket.ts';
import type { FactorView } from '../../shared/contracts/factors.ts';
import type { DecisionView, LotsBoard } from '../../shared/contracts/lots.ts';
import type { NoticeState, NoticeView } from '../../shared/contracts/notices.ts';
import type { RipeningView } from '../../shared/contracts/results.ts';
import type { ReviewView, TicketReading } from '../../shared/contracts/tickets.ts';
import type { WeatherReading, WeatherView } from '../../shared/contracts/weather.ts';
import { PickNotice } from '../../server/models/PickNotice.ts';
import { makeZonedBlock, type ZonedBlock } from './support/makeZonedBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let winemaker: Agent;
let west: ZonedBlock;
let east: ZonedBlock;

beforeAll(async () => {
  openComputePool(1);
  app = await startTestApp();
  estate = await app.addEstate('Ripening test');
  const owner = { estateId: estate.estateId, personId: estate.ownerId };
  west = await makeZonedBlock(owner, { name: 'West Plot', variety: 'Carignan' });
  east = await makeZonedBlock(owner, { name: 'East Plot', variety: 'Carignan', west: 2.41 });
  winemaker = await app.as((await app.addPerson(estate.estateId, 'winemaker')).email);
  await read(west, 1, [24.0, 24.2, 23.8, 24.1, 23.9]);
  await read(west, 2, [21.0, 21.2, 20.8, 21.1, 20.9]);
  await read(east, 1, [24.1, 24.3, 23.9, 24.2, 24.0]);
  await read(east, 2, [21.1, 21.3, 20.9, 21.2, 21.0]);
});
afterAll(async () => {
  await app.close();
  await closeComputePool();
});

const base = () => `/api/estates/${estate.estateId}`;
const board = async (scenario?: string) => (await winemaker.get(`${base()}/lots${scenario ? `?scenario=${scenario}` : ''}`)).body as LotsBoard;

async function read(block: ZonedBlock, zone: number, values: number[], more: { measureCode?: string; unit?: string; day?: string; flags?: string[] } = {}): Promise<void> {
  const { measureCode = 'brix', unit = '°Brix', day = '2026-09-01', flags = [] } = more;
  const vines = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === zone);
  const readings = values.map((value, index) => {
    const vine = vines[100 + index * 37]!;
    return { id: randomUUID(), blockId: block.blockId, rowId: block.ground.stored[block.ground.vines.row[vine]!]!.id, ordinal: block.ground.vines.ordinal[vine], measureCode, value, unit, takenAt: `${day}T08:00:00Z`, flags };
  });
  const answer = await winemaker.post(`${base()}/readings`, { readings });
  expect(answer.body.outcomes.map((outcome: { state: string }) => outcome.state)).toEqual(values.map(() => 'received'));
}

describe('weather', () => {
  const send = (text: string, apply = false) => winemaker.post(`${base()}/weather/import`, { text, apply });
  const days = async () => ((await winemaker.get(`${base()}/weather`)).body as WeatherView).days;

  it('is read back before it is kept, and kept whole or not at all', async () => {
    const table = 'date,max °C,min °C,rain mm\n2026-08-30,31.0,15.0,0\n2026-08-31,29.0,14.0,12.5\n';
    expect((await send(table)).body as WeatherReading).toMatchObject({ kept: 0, replaces: 0, problems: [] });
    expect(await days()).toEqual([]);
    const broken = await send(`${table}2026-09-01,12,19,0\n`, true);
    expect(broken.status).toBe(422);
    expect(await days()).toEqual([]);
    expect(((await send(table, true)).body as WeatherReading).kept).toBe(2);
    expect((await days()).map(({ day, rainMm }) => [day, rainMm])).toEqual([['2026-08-30', 0], ['2026-08-31', 12.5]]);
  });

  it('of a day replaces what was known of it; a day ahead is refused', async () => {
    expect((await winemaker.write('put', `${base()}/weather`).send({ day: '2026-08-31', maxC: 30, minC: 14, rainMm: 9 })).status).toBe(204);
    expect((await days()).find(({ day }) => day === '2026-08-31')).toMatchObject({ rainMm: 9, source: 'typed' });
    expect((await winemaker.write('put', `${base()}/weather`).send({ day: '2031-01-01', maxC: 30, minC: 14, rainMm: 0 })).status).toBe(422);
    expect((await winemaker.write('put', `${base()}/weather`).send({ day: '2026-08-31', maxC: 30, minC: null, rainMm: 0 })).status).toBe(422);
  });

  it('stands beside a visit as rain, heat and wet fruit, with the heat of the season', async () => {
    await read(west, 1, [24.4, 24.3], { day: '2026-09-02', flags: ['wetFruit'] });
    const view = (await winemaker.get(`${base()}/blocks/${west.blockId}/ripening`)).body as RipeningView;
    expect(view.conditions.find(({ visit }) => visit === '2026-09-01')).toMatchObject({ flags: ['rain'], rainMm: 9, maxC: 31 });
    expect(view.conditions.find(({ visit }) => visit === '2026-09-02')).toMatchObject({ flags: ['wetFruit', 'rain'], wetReadings: 2 });
    // (31+15)/2 − 10 and (30+14)/2 − 10.
    expect(view.heat).toMatchObject({ sum: 25, from: '2026-04-01', to: '2026-08-31', days: 2 });
  });

  it('is of one estate only', async () => {
    const other = await app.addEstate('Elsewhere');
    const stranger = await app.as(other.ownerEmail);
    expect(((await stranger.get(`/api/estates/${other.estateId}/weather`)).body as WeatherView).days).toEqual([]);
    expect((await stranger.get(`${base()}/weather`)).status).toBe(404);
  });
});

describe('as known on a day', () => {
  it('shows neither later readings nor zones that were not in force', async () => {
    const answer = await winemaker.get(`${base()}/blocks/${west.blockId}/ripening?known=2026-01-01`);
    expect(answer.status).toBe(404);
    expect(answer.body.detail).toMatch(/no zones in force on that day/);
  });
});

describe('suggested lots', () => {
  let proposal: LotsBoard;

  it('need tanks, and say so', async () => {
    const answer = await winemaker.post(`${base()}/lot-suggestions`, { name: 'Proposal', firstDay: '2026-09-20' });
    expect(answer.status).toBe(422);
    expect(answer.body.detail).toMatch(/No tank is free/);
  });

  it('are refused where nothing fits, with the reason for every zone, and leave nothing behind', async () => {
    const tiny = (await winemaker.post(`${base()}/tanks`, { name: 'Demijohn', litres: 50 })).body.id as string;
    const answer = await winemaker.post(`${base()}/lot-suggestions`, { name: 'Too small', firstDay: '2026-09-20' });
    expect(answer.status).toBe(422);
    expect(answer.body).toMatchObject({ code: 'nothingFits' });
    expect(answer.body.detail).toMatch(/Choose larger tanks/);
    expect((answer.body.leftOut as { reason: { code: string } }[]).map(({ reason }) => reason.code)).toEqual(['tooBig', 'tooBig', 'tooBig', 'tooBig']);
    expect((await board()).scenarios).toHaveLength(1);
    await winemaker.delete(`${base()}/tanks/${tiny}`);
  });

  it('put the early zones of two blocks together and the late ones, in a what-if of their own', async () => {
    const zone = (await board()).zones[0]!;
    // Two tanks, each for two zones of about the same tonnes at 900 L a tonne.
    const litres = Math.round((2 * zone.tonnes.value * 900) / 0.5);
    for (const name of ['T1', 'T2']) await winemaker.post(`${base()}/tanks`, { name, litres, workingFill: 0.9, minimumFill: 0.1 });
    await winemaker.write('put', `${base()}/day-capacities`).send({ pickT: 3 * zone.tonnes.value });
    const answer = await winemaker.post(`${base()}/lot-suggestions`, { name: 'Proposal', firstDay: '2026-09-20', leastChance: 0.5 });
    expect(answer.status).toBe(201);
    proposal = await board(answer.body.id as string);
    const groups = proposal.lots.map((lot) => lot.lines.map((line) => `${line.blockName} ${line.number}`).sort().join(', ')).sort();
    expect(groups).toEqual(['East Plot 1, West Plot 1', 'East Plot 2, West Plot 2']);
    expect(proposal.suggestion).toMatchObject({ provedBest: true, leftOut: [] });
    expect(proposal.suggestion!.lots.flatMap((lot) => lot.zones.map(({ reason }) => reason.code))).toEqual(['alike', 'alike', 'alike', 'alike']);
    // A day holds one such lot, so the second goes to the next.
    expect(proposal.lots.map(({ pickOn }) => pickOn).sort()).toEqual(['2026-09-20', '2026-09-21']);
    expect((await board()).lots).toEqual([]);
  });

  it('leave out what misses a target, with the reason', async () => {
    const answer = await winemaker.post(`${base()}/lot-suggestions`, { name: 'Ripe only', firstDay: '2026-09-20', leastChance: 0.5, targets: { brix: { low: 23 } } });
    const { suggestion } = await board(answer.body.id as string);
    expect(suggestion!.leftOut.map(({ zone, reason }) => `${zone} ${reason.code}`).sort()).toEqual(['East Plot 2 outsideTarget', 'West Plot 2 outsideTarget']);
  });

  it('can be changed by hand: a zone moves from lot to lot in one step', async () => {
    const [from, to] = proposal.lots;
    const move = (fromVersion: number) => winemaker.post(`${base()}/lot-moves`, { zoneId: from!.lines[0]!.zoneId, fromLotId: from!.id, fromVersion, toLotId: to!.id, toVersion: to!.version });
    expect((await move(99)).status).toBe(412);
    expect((await move(from!.version)).status).toBe(204);
    const after = await board(proposal.scenarioId);
    expect(after.lots.map((lot) => lot.lines.length).sort()).toEqual([1, 3]);
    expect(after.zones.every(({ freeShare }) => freeShare < 0.001)).toBe(true);
    const back = await board(proposal.scenarioId);
    const [few, many] = [back.lots.find((lot) => lot.lines.length === 1)!, back.lots.find((lot) => lot.lines.length === 3)!];
    expect((await winemaker.post(`${base()}/lot-moves`, { zoneId: from!.lines[0]!.zoneId, fromLotId: many.id, fromVersion: many.version, toLotId: few.id, toVersion: few.version })).status).toBe(204);
  });

  it('come into force only when somebody puts them there', async () => {
    expect((await winemaker.post(`${base()}/scenarios/${proposal.scenarioId}/apply`)).status).toBe(200);
    const live = await board();
    expect(live.lots.map(({ state }) => state)).toEqual(['draft', 'draft']);
    expect(live.zones.every(({ inLots }) => inLots.length === 1)).toBe(true);
    expect((await winemaker.delete(`${base()}/scenarios/${live.scenarioId}`)).status).toBe(422);
    expect((await winemaker.delete(`${base()}/scenarios/${proposal.scenarioId}`)).status).toBe(204);
    expect((await board()).scenarios.map(({ name }) => name)).not.toContain('Proposal');
  });

  it('say what a zone does to its lot', async () => {
    const lot = (await board()).lots.find((one) => one.lines.some((line) => line.blockName === 'West Plot' && line.number === 1))!;
    const line = lot.lines.find(({ blockName }) => blockName === 'West Plot')!;
    expect(line.without!.brix).toBeCloseTo(24.1, 6);
  });
});

describe('a decision', () => {
  it('stays as the screen showed it, whatever is read later', async () => {
    const lot = (await board()).lots.find((one) => one.lines.some((line) => line.blockName === 'West Plot' && line.number === 1))!;
    await winemaker.write('post', `${base()}/lots/${lot.id}/confirm`).set('if-match', `"${lot.version}"`);
    await read(west, 1, [26.0, 26.2, 25.8, 26.1, 25.9], { day: '2026-09-08' });
    const [decision] = (await winemaker.get(`${base()}/lots/${lot.id}/decisions`)).body.items as DecisionView[];
    expect(decision!.kind).toBe('confirm');
    expect(decision!.shown.lot.summary).toEqual(lot.summary);
    expect((await board()).lots.find(({ id }) => id === lot.id)!.summary.brix!.value).toBeGreaterThan(lot.summary.brix!.value + 0.5);
  });
});

describe('a notice on paper', () => {
  it('tells by its code whether its number still holds, to anybody who holds it and nothing more', async () => {
    const crew = await app.addPerson(estate.estateId, 'crew', 'Picker');
    const lot = (await board()).lots.find(({ state }) => state === 'confirmed')!;
    const send = () => winemaker.post(`${base()}/lots/${lot.id}/notices`, { people: [crew.id] });
    const first = (await send()).body as { id: string; number: number };
    const { code } = await PickNotice.query().findById(first.id).throwIfNotFound();
    const anybody = await app.browser();
    const state = async () => (await anybody.get(`/api/notice-state/${code}`)).body as NoticeState;
    expect(await state()).toEqual({ number: first.number, estateName: 'Ripening test', isVoid: false, isOver: true, replacedBy: null, pickOn: lot.pickOn });
    await send();
    const third = (await send()).body as { number: number };
    expect(await state()).toMatchObject({ isVoid: true, replacedBy: third.number, pickOn: null });
    expect((await anybody.get(`/api/notice-state/${randomUUID()}`)).status).toBe(404);
    const paper = await winemaker.get(`${base()}/notices/${first.id}/sheet`);
    expect(paper.headers['content-type']).toBe('application/pdf');
    const old = ((await winemaker.get(`${base()}/notices`)).body.items as NoticeView[]).filter(({ lotId, voidAt }) => lotId === lot.id && voidAt !== null);
    expect(old).toHaveLength(2);
  });
});

describe('a table of scale tickets', () => {
  it('is entered whole, in the estate’s own time, and never changed', async () => {
    const lots = (await board()).lots;
    const table = (extra = '') => `ticket;lot;gross kg;tare kg;date;time\nB-1;${lots[0]!.name};9000;3000;20/09/2026;08:15\nB-2;${lots[1]!.name};8000;3000;20/09/2026;10:00\n${extra}`;
    const send = (text: string, apply: boolean) => winemaker.post(`${base()}/tickets/import`, { text, apply });
    expect((await send(table('B-1;Nowhere;1;2;x;\n'), true)).status).toBe(422);
    expect((await winemaker.get(`${base()}/tickets`)).body.items).toEqual([]);
    expect((await send(table(), false)).body as TicketReading).toMatchObject({ kept: 0, tickets: [{ ticketNo: 'B-1', netKg: 6000 }, { ticketNo: 'B-2', netKg: 5000 }] });
    expect(((await send(table(), true)).body as TicketReading).kept).toBe(2);
    const again = (await send(table(), false)).body as TicketReading;
    expect(again.problems.map(({ code }) => code)).toEqual(['known', 'known']);
    await expect(ScaleTicket.query().where({ estateId: estate.estateId }).patch({ note: 'changed' })).rejects.toThrow('never changed');
  });

  it('gives the review its zones, blocks and days, with few said to be few', async () => {
    const review = (await winemaker.get(`${base()}/review`)).body as ReviewView;
    expect(review.lots.map(({ actualT }) => actualT).sort()).toEqual([5, 6]);
    for (const { few } of [...review.byBlock, ...review.byDate]) expect(few).toBe(true);
    const letter = await winemaker.get(`${base()}/blocks/${west.blockId}/season-letter`);
    expect(letter.status).toBe(200);
    expect(letter.headers['content-type']).toBe('application/pdf');
  });
});

describe('learned factors', () => {
  const factors = async () => (await winemaker.get(`${base()}/factors`)).body.items as FactorView[];
  const measured = (lotId: string, figures: object) => winemaker.post(`${base()}/lots/${lotId}/cellar-results`, figures);

  it('come from the cellar’s figures, stay off, and are refused while they rest on few lots', async () => {
    const [first] = (await board()).lots;
    const netT = first!.name === (await winemaker.get(`${base()}/tickets`)).body.items[0].lotName ? 5 : 6;
    expect((await measured(first!.id, {})).status).toBe(422);
    await measured(first!.id, { mustL: 4800, tankBrix: 22, leftOutKg: 300 });
    const litres = (await factors()).find(({ kind }) => kind === 'mustL')!;
    expect(litres).toMatchObject({ about: 'red', n: 1, few: true, isOn: false, low: null });
    expect([4800 / netT, 4800 / 5, 4800 / 6]).toContain(litres.mean);
    const answer = await winemaker.write('put', `${base()}/factors`).send({ kind: 'mustL', about: 'red', isOn: true });
    expect(answer.status).toBe(422);
    expect(answer.body.detail).toMatch(/rests on one lot; 3 are needed/);
  });
});

describe('equal readings', () => {
  it('are not known to the last digit, and no small step between them is called a change', async () => {
    for (const [day, value] of [['2026-09-01', 2.5], ['2026-09-08', 2.6]] as const) await read(west, 1, [value, value, value], { measureCode: 'malic', unit: 'g/L', day });
    const view = (await winemaker.get(`${base()}/blocks/${west.blockId}/ripening`)).body as RipeningView;
    const series = view.series.find(({ measure, zone }) => measure === 'malic' && zone === 1)!;
    // t(0.975; 2) = 4.302653 times 0.1/√12/√3 is 0.0717; the zone's vines take a little off.
    expect(series.points[0]!.halfWidth).toBeGreaterThan(0.07);
    expect(series.points[0]!.halfWidth).toBeLessThan(0.0718);
    expect(series.change).toMatchObject({ sameVines: true, word: 'notDistinguishable' });
  });
});
