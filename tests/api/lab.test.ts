import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { Bag } from '../../server/models/Bag.ts';
import { Estate } from '../../server/models/Estate.ts';
import { LabMapping } from '../../server/models/LabMapping.ts';
import { Reading } from '../../server/models/Reading.ts';
import { closeBags } from '../../server/services/bags/closeBags.ts';
import { receiveBags } from '../../server/services/bags/receiveBags.ts';
import type { LabBench, LabFileView, LabOutcome } from '../../shared/contracts/lab.ts';
import { labelCode } from '../../shared/field/labelCode.ts';
import { writeXlsx } from '../core/lab/writeXlsx.ts';
import { makeStripBlock, type StripBlock } from './support/makeStripBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';
import { startFiles, type Files } from './support/withFiles.ts';

const codes = [1, 2, 3, 4, 5, 6].map((number) => labelCode(number * 9999));
const [A, B] = codes as [string, string];
let app: TestApp;
let files: Files;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let block: StripBlock;
let lab: Agent;
let winemaker: Agent;
let owner: { estateId: string; personId: string; roles: ['owner'] };

beforeAll(async () => {
  app = await startTestApp();
  files = await startFiles(app);
  estate = await app.addEstate('Lab test');
  block = await makeStripBlock(estate);
  lab = await app.as((await app.addPerson(estate.estateId, 'lab', 'Wim Roe')).email);
  winemaker = await app.as((await app.addPerson(estate.estateId, 'winemaker', 'Vera Moll')).email);
  owner = { estateId: estate.estateId, personId: estate.ownerId, roles: ['owner'] };
});
afterAll(async () => {
  await files.close();
  await app.close();
});
beforeEach(async () => {
  await app.knex.raw('truncate readings, bags, lab_mappings, lab_files cascade');
  // Bags of this morning, closed on a day of the season, so that the bench shows them.
  const closedAt = new Date(Date.now() - 3_600_000).toISOString();
  const bags = codes.map((code, at) => ({ id: randomUUID(), code, blockId: block.blockId, vines: [{ rowId: block.rows[at < 5 ? at + 1 : 45]!.id, ordinal: 3 }], closedAt }));
  await app.knex.raw("update seasons set ends_on = '2099-12-31' where estate_id = ? and starts_on = (select max(starts_on) from seasons where estate_id = ?)", [estate.estateId, estate.estateId]);
  await closeBags(owner, { bags }, new Date());
  await receiveBags(owner, codes, new Date());
});

const base = () => `/api/estates/${estate.estateId}/lab`;
const bench = async () => (await lab.get(base())).body as LabBench;
const result = (over: Record<string, unknown> = {}) => ({ id: randomUUID(), code: A, measureCode: 'brix', typed: '23,4', ...over });
const type = async (...results: object[]) => (await lab.post(`${base()}/results`, { results })).body.outcomes as LabOutcome[];

describe('two people at one bench', () => {
  it('see each other: a figure that came meanwhile is neither doubled nor corrected unseen', async () => {
    const mine = result({ typed: '23,4', seen: [] });
    const theirs = result({ typed: '23,9', seen: [] });
    expect((await type(mine))[0]!.state).toBe('received');
    const [refused] = await type(theirs);
    expect(refused).toMatchObject({ state: 'refused', reason: expect.stringContaining('23,4 was stored there meanwhile') });
    expect((await type(mine))[0]!.state).toBe('received');
    expect((await type({ ...theirs, id: randomUUID(), seen: [mine.id] }))[0]!.state).toBe('received');
    const [one, other] = [result({ code: B, typed: '22', seen: [] }), result({ code: B, typed: '22,1', seen: [] })];
    const states = (await Promise.all([type(one), type(other)])).map(([outcome]) => outcome!.state);
    expect(states.sort()).toEqual(['received', 'refused']);
    // Two readings of one cell come together, and neither is news to the other.
    expect((await type(result({ measureCode: 'ph', typed: '3,4', seen: [] }), result({ measureCode: 'ph', typed: '3,5', seen: [] }))).map(({ state }) => state)).toEqual(['received', 'received']);
    expect((await bench()).results).toHaveLength(5);
  });
});

describe('the day of picking', () => {
  afterAll(() => Estate.query().findById(estate.estateId).patch({ timeZone: 'Europe/Paris' }));

  it('is that of the estate: bags of one morning are one group, whatever day it is at Greenwich', async () => {
    await Estate.query().findById(estate.estateId).patch({ timeZone: 'Pacific/Auckland' });
    // 08:30 and 13:30 of one day at the estate, either side of midnight at Greenwich.
    const day = new Date(Date.now() - 3 * 86_400_000).toISOString().slice(0, 10);
    await Bag.query().findOne({ code: A }).patch({ closedAt: new Date(`${day}T20:30:00Z`) });
    await Bag.query().findOne({ code: B }).patch({ closedAt: new Date(Date.parse(`${day}T20:30:00Z`) + 5 * 3_600_000) });
    await type(result(), result({ code: B }));
    expect((await bench()).groups.map(({ resultIds }) => resultIds.length)).toEqual([2]);
  });
});

describe('figures typed at the bench', () => {
  it('are stored once however often they are sent, provisional, with instrument and what was typed', async () => {
    const batch = [result({ instrument: 'Refractometer 2', method: 'OIV-MA-AS2-02' }), result({ measureCode: 'malic', typed: '<0,1' }), result({ code: B, unit: 'oechsle', typed: '90' })];
    for (let i = 0; i < 3; i++) expect((await type(...batch)).map(({ state }) => state)).toEqual(['received', 'received', 'received']);
    const { results } = await bench();
    expect(results).toHaveLength(3);
    expect(results.find(({ id }) => id === batch[0]!.id)).toMatchObject({ value: 23.4, typed: '23,4', instrument: 'Refractometer 2', method: 'OIV-MA-AS2-02', state: 'provisional', person: 'Wim Roe' });
    expect(results.find(({ id }) => id === batch[1]!.id)).toMatchObject({ value: 0.1, below: true, typed: '<0,1' });
    expect(results.find(({ id }) => id === batch[2]!.id)!.value).toBeCloseTo(21.5938, 3);
  });

  it('are refused one by one with the reason', async () => {
    const outcomes = await type(result(), result({ code: labelCode(77) }), result({ typed: 'sweet' }), result({ measureCode: 'colour' }), result({ unit: 'gravity', typed: '23' }), result({ code: `${A.slice(0, 5)}${A.endsWith('B') ? 'C' : 'B'}` }));
    expect(outcomes.map(({ state }) => state)).toEqual(['received', ...Array<string>(5).fill('refused')]);
    expect(outcomes.slice(1).map(({ reason }) => reason)).toEqual([expect.stringMatching(/No bag carries/), expect.stringMatching(/not a figure/), expect.stringMatching(/no measure "colour"/), expect.stringMatching(/cannot be in this unit/), expect.stringMatching(/do not fit/)]);
  });

  it('are corrected by a figure of its own, with a reason once they were checked', async () => {
    const first = result();
    await type(first);
    await lab.put(`${base()}/results/state`, { resultIds: [first.id], state: 'checked' });
    expect((await bench()).results[0]).toMatchObject({ state: 'checked', stateBy: 'Wim Roe' });
    const correction = { supersedes: first.id, typed: '24.3' };
    expect((await type(result(correction)))[0]!.reason).toMatch(/Say why/);
    expect((await type(result({ ...correction, reason: 'Figures turned round' })))[0]!.state).toBe('received');
    expect((await bench()).results).toMatchObject([{ value: 24.3, state: 'provisional', corrected: true }]);
    expect(await Reading.query().resultSize()).toBe(2);
  });

  it('that stand apart are marked by the rule, and the interval is shown with and without', async () => {
    const values = ['22.0', '22.4', '21.8', '22.2', '29.5'];
    await type(...values.map((typed, at) => result({ code: codes[at], typed })));
    const [group] = (await bench()).groups;
    const marked = (await bench()).results.find(({ value }) => value === 29.5)!;
    expect(group).toMatchObject({ measure: 'brix', zone: 1, outliers: [marked.id], withAll: { n: 5 }, withoutMarked: { n: 4 } });
    expect(group!.withoutMarked!.mean).toBeCloseTo(22.1, 6);
    expect(group!.withLeftOut).toBeNull();
    await winemaker.put(`${base()}/results/${marked.id}/exclusion`, { reason: 'Bag was torn' });
    const [after] = (await bench()).groups;
    expect(after).toMatchObject({ outliers: [], outside: [], withAll: { n: 4 }, withLeftOut: { n: 5, mean: group!.withAll!.mean } });
  });
});

describe('leaving a result out', () => {
  it('is proposed by the lab and decided by the winemaker; the figure stays', async () => {
    const one = result();
    await type(one);
    expect((await lab.put(`${base()}/results/${one.id}/exclusion`, { reason: 'Bag was torn' })).body).toEqual({ proposed: true });
    expect((await bench()).results[0]).toMatchObject({ excludedReason: null, exclusionProposal: { reason: 'Bag was torn', by: 'Wim Roe' } });
    expect((await lab.put(`${base()}/results/state`, { resultIds: [one.id], state: 'final' })).status).toBe(409);
    expect((await winemaker.put(`${base()}/results/${one.id}/exclusion`, { reason: 'Bag was torn' })).body).toEqual({ proposed: false });
    expect((await bench()).results[0]).toMatchObject({ excludedReason: 'Bag was torn', value: 23.4 });
    expect((await lab.put(`${base()}/results/${one.id}/exclusion`, { reason: null })).status).toBe(409);
    expect((await winemaker.put(`${base()}/results/${one.id}/exclusion`, { reason: 'x' })).status).toBe(422);
  });
});

describe('a file of the laboratory', () => {
  const workbook = (rows: Parameters<typeof writeXlsx>[0][string]) => Buffer.from(writeXlsx({ Results: [['Sample', 'Sucres', 'Acidité totale'], ...rows] }));
  const send = (name: string, body: Buffer, agent = lab) => agent.write('post', `${base()}/files`).attach('files', body, name);

  it('stores nothing until its questions are answered and it is confirmed; the mapping is remembered', async () => {
    const sent = await send('week 36.xlsx', workbook([[A, 13.1, 4.5], [B, 12.4, 4.1]]));
    const file = sent.body as LabFileView;
    expect(file.questions.map(({ key }) => key)).toEqual(['unit:Sucres', 'unit:Acidité totale']);
    expect((await lab.post(`${base()}/files/${file.id}/store`, { labName: 'Coteau' })).status).toBe(409);
    expect((await lab.patch(`${base()}/files/${file.id}`, { answers: { 'unit:Sucres': 'litres' } })).body.detail).toMatch(/Choose from/);
    const answered = await lab.patch(`${base()}/files/${file.id}`, { answers: { 'unit:Sucres': 'baume', 'unit:Acidité totale': 'sulphuricGPerL' } });
    expect((answered.body as LabFileView).entries).toHaveLength(4);
    expect(await Reading.query().resultSize()).toBe(0);
    expect((await lab.post(`${base()}/files/${file.id}/store`, { labName: 'Coteau' })).body).toMatchObject({ state: 'stored', storedCount: 4 });
    expect((await lab.post(`${base()}/files/${file.id}/store`, { labName: 'Coteau' })).status).toBe(409);
    const acids = await Reading.query().where({ measureCode: 'ta' }).orderBy('value', 'desc');
    expect(acids[0]!.value).toBeCloseTo(6.886199, 5);
    expect(acids[0]).toMatchObject({ valueTyped: '4.5', unitTyped: 'g/L H2SO4', state: 'provisional', source: 'lab' });
    expect(await AuditEntry.query().where({ estateId: estate.estateId, action: 'lab.storeFile' }).resultSize()).toBe(1);

    const next = (await send('week 37.xlsx', workbook([[codes[2]!, 13.4, 4.0]]))).body as LabFileView;
    expect(next).toMatchObject({ labName: 'Coteau', rememberedFrom: 'Coteau' });
    expect(next.questions.every(({ answer }) => answer !== null)).toBe(true);
    expect(await LabMapping.query().resultSize()).toBe(1);
  });

  it('replaces earlier figures by corrections when that is the answer', async () => {
    await type(result({ typed: '20' }));
    const file = (await send('again.csv', Buffer.from(`Code;Brix\n${A};23,4\n`))).body as LabFileView;
    expect(file.questions).toMatchObject([{ key: 'again' }]);
    await lab.patch(`${base()}/files/${file.id}`, { answers: { again: 'replace' } });
    await lab.post(`${base()}/files/${file.id}/store`, { labName: 'Coteau' });
    expect((await bench()).results).toMatchObject([{ value: 23.4, corrected: true, fileName: 'again.csv' }]);
  });

  it('corrects checked figures only with one reason for the whole file, which stands with them and in the history', async () => {
    await type(result({ typed: '20' }));
    await Reading.query().patch({ state: 'checked' });
    const file = (await send('again.csv', Buffer.from(`Code;Brix\n${A};23,4\n`))).body as LabFileView;
    expect(file.changesChecked).toBe(0);
    expect((await lab.patch(`${base()}/files/${file.id}`, { answers: { again: 'replace' } })).body).toMatchObject({ changesChecked: 1 });
    const refused = await lab.post(`${base()}/files/${file.id}/store`, { labName: 'Coteau' });
    expect(refused.status).toBe(422);
    expect(refused.body.detail).toMatch(/again\.csv.*why it changes/);
    expect(await Reading.query().resultSize()).toBe(1);
    expect((await lab.post(`${base()}/files/${file.id}/store`, { labName: 'Coteau', reason: 'Refractometer set anew' })).status).toBe(200);
    expect(await Reading.query().findOne({ value: 23.4 })).toMatchObject({ note: 'Refractometer set anew', state: 'provisional' });
    expect(await AuditEntry.query().where({ estateId: estate.estateId, action: 'lab.storeFile' }).orderBy('id', 'desc').first()).toMatchObject({ reason: 'Refractometer set anew' });
  });

  it('comes back byte for byte, and only within its estate', async () => {
    const body = workbook([[A, 13.1, 4.5]]);
    const file = (await send('week 36.xlsx', body)).body as LabFileView;
    const back = await lab.get(`${base()}/files/${file.id}/original`).buffer(true).parse((response, done) => {
      const parts: Buffer[] = [];
      response.on('data', (part: Buffer) => parts.push(part));
      response.on('end', () => done(null, Buffer.concat(parts)));
    });
    expect(Buffer.compare(back.body as Buffer, body)).toBe(0);
    const stranger = await app.addEstate();
    const other = await app.as(stranger.ownerEmail);
    expect((await other.get(`/api/estates/${stranger.estateId}/lab/files/${file.id}`)).status).toBe(404);
  });

  it('that is no table is refused with the way out, and not kept', async () => {
    const answer = await send('results.csv', Buffer.from('%PDF-1.7 scanned'));
    expect(answer.status).toBe(422);
    expect(answer.body.detail).toMatch(/results\.csv: It is a PDF.*type the results in/);
    expect((await lab.get(`${base()}/files`)).body.total).toBe(0);
    expect(files.incoming()).toEqual([]);
  });

  it('with a workbook that unpacks to far more than it weighs is refused before it is unpacked', async () => {
    const { zipSync } = await import('fflate');
    const bomb = Buffer.from(zipSync({ 'xl/workbook.xml': new Uint8Array(90_000_000) }, { level: 9 }));
    const answer = await send('big.xlsx', bomb);
    expect(answer.status).toBe(422);
    expect(answer.body.detail).toMatch(/unpack/);
  });
});
