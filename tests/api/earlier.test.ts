import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { Reading } from '../../server/models/Reading.ts';
import { Season } from '../../server/models/Season.ts';
import type { EarlierFileView } from '../../shared/contracts/earlier.ts';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import type { ResultsView } from '../../shared/contracts/results.ts';
import { makeStripBlock, type StripBlock } from './support/makeStripBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';
import { startFiles, type Files } from './support/withFiles.ts';

let app: TestApp;
let files: Files;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let block: StripBlock;
let agronomist: Agent;

beforeAll(async () => {
  app = await startTestApp();
  files = await startFiles(app);
  estate = await app.addEstate('Earlier seasons');
  block = await makeStripBlock(estate);
  agronomist = await app.as((await app.addPerson(estate.estateId, 'agronomist', 'Ana Roca')).email);
});
afterAll(async () => {
  await files.close();
  await app.close();
});
beforeEach(async () => {
  await app.knex.raw('truncate readings, earlier_files cascade');
});

const base = () => `/api/estates/${estate.estateId}/earlier-readings`;
const send = async (text: string, { agent = agronomist, name = 'visits.csv', at = base() } = {}) => agent.write('post', at).attach('files', Buffer.from(text), name);
const sent = async (text: string, name?: string) => (await send(text, name === undefined ? {} : { name })).body as EarlierFileView;
const store = (file: Pick<EarlierFileView, 'id'>, leaveOut = 0) => agronomist.post(`${base()}/${file.id}/store`, { leaveOut });

/** Two seasons of ten vines in each of three strips, sweeter to the east. */
function visits(extra: readonly string[] = []): string {
  const lines = ['2023-08-30', '2024-09-04'].flatMap((day, year) => [3, 20, 40].flatMap((row, strip) => Array.from({ length: 10 }, (_, i) => `${row},${2 + 3 * i},${day},${(20 + strip + year * 0.5 + (i % 5) * 0.3).toFixed(1)},${(3.3 + strip * 0.05 + (i % 3) * 0.02).toFixed(2)}`)));
  return ['row,vine,date,brix,ph', ...lines, ...extra].join('\n');
}

describe('a table of readings of earlier visits', () => {
  it('says what it understood and stores nothing before it is confirmed', async () => {
    const file = await sent(visits());
    expect(file).toMatchObject({ state: 'asks', questions: [], refusedCount: 0, summary: { lines: 60, readings: 120, known: 0, days: { count: 2, first: '2023-08-30', last: '2024-09-04' }, blocks: [{ name: 'Zoned plot', vines: 30, readings: 120 }] } });
    expect(file.summary!.seasons.map(({ name, isNew, readings }) => [name, isNew, readings])).toEqual([['2023', true, 60], ['2024', true, 60]]);
    const brix = file.summary!.measures.find(({ code }) => code === 'brix')!;
    expect([brix.count, brix.least, brix.most]).toEqual([60, 20, 23.7]);
    // Strips 20, 21, 22; half of them half a degree more; steps 0 to 1.2 in the middle.
    expect(brix.mean).toBeCloseTo(21 + 0.25 + 0.6, 6);
    expect([await Reading.query().resultSize(), await Season.query().where({ estateId: estate.estateId }).resultSize()]).toEqual([0, 1]);
  });

  it('is stored at once with its seasons, and counts as the history of its zones when a plan is made', async () => {
    const file = await sent(visits());
    const stored = await store(file);
    expect([stored.status, (stored.body as EarlierFileView).state]).toEqual([200, 'stored']);
    const readings = await Reading.query().where({ estateId: estate.estateId });
    expect(readings).toHaveLength(120);
    expect(readings[0]).toMatchObject({ source: 'import', state: 'checked', blockId: block.blockId, earlierFileId: file.id });
    const seasons = await Season.query().where({ estateId: estate.estateId }).orderBy('startsOn');
    expect(seasons.slice(0, 2).map(({ name, startsOn, endsOn, closedAt }) => [name, startsOn, endsOn, closedAt !== null])).toEqual([['2023', '2022-12-01', '2023-11-30', true], ['2024', '2023-12-01', '2024-11-30', true]]);
    expect(new Set(readings.map(({ seasonId }) => seasonId))).toEqual(new Set(seasons.slice(0, 2).map(({ id }) => id)));
    const basis = (await agronomist.get(`/api/estates/${estate.estateId}/zonings/${block.zoningId}/plan-basis`)).body as PlanBasis;
    const spreads = basis.measures.find(({ code }) => code === 'brix')!.spreads;
    expect(spreads.map(({ source, n, seasons: years }) => [source, n, years])).toEqual(Array(3).fill(['zone', 20, [2023, 2024]]));
    const results = (await agronomist.get(`/api/estates/${estate.estateId}/zonings/${block.zoningId}/results?season=${seasons[1]!.id}`)).body as ResultsView;
    expect(results.visits.map(({ on, seasonId }) => [on, seasonId])).toEqual([['2024-09-04', seasons[1]!.id]]);
    const deed = await AuditEntry.query().findOne({ estateId: estate.estateId, action: 'earlier.store', subjectId: file.id });
    expect(deed!.after).toMatchObject({ readings: 120, seasons: ['2023', '2024'] });
    // The season in force is still the present one.
    expect((await agronomist.get('/api/session')).body.estates[0].season.id).toBe(block.seasonId);
  });

  it('is stored once however often it is confirmed or sent, and another table with the same readings adds none', async () => {
    const file = await sent(visits());
    await Promise.all([store(file), store(file), store(file)]);
    expect((await store(file)).body).toMatchObject({ state: 'stored', summary: { readings: 120 } });
    expect((await send(visits(), { name: 'again.csv' })).body).toMatchObject({ id: file.id, state: 'stored' });
    const other = await sent(visits(['3,3,2024-09-04,21.4,3.31']));
    expect(other.summary).toMatchObject({ readings: 2, known: 120 });
    await store(other);
    expect(await Reading.query().resultSize()).toBe(122);
    expect((await store(await sent(`${visits()}\n`))).body.detail).toMatch(/here already/);
  });

  it('of which a part cannot be used is stored only when that part is named', async () => {
    const file = await sent(visits(['999,1,2024-09-04,21,3.3', '3,2,2099-01-01,21,3.3']));
    expect(file).toMatchObject({ refusedCount: 2, refused: [{ line: 62, code: 'noRow' }, { line: 63, code: 'future' }] });
    const refusal = await store(file);
    expect([refusal.status, refusal.body.code, refusal.body.detail]).toEqual([409, 'linesRefused', expect.stringMatching(/visits\.csv cannot be used, first in row 62.*Nothing is stored/)]);
    expect((await store(file, 1)).status).toBe(409);
    expect(await Reading.query().resultSize()).toBe(0);
    expect((await store(file, 2)).status).toBe(200);
    expect(await Reading.query().resultSize()).toBe(120);
  });

  it('asks what it does not tell, and remembers the answers for the next table with the same columns', async () => {
    const table = (sugar: string) => `Row;Vine;Date;Sucre\n3;2;2024-09-04;${sugar}\n3;5;2024-09-04;12,1\n`;
    const file = await sent(table('12,4'));
    expect(file.questions.map(({ key }) => key)).toEqual(['unit:Sucre']);
    expect((await store(file)).body.code).toBe('questionsOpen');
    expect((await agronomist.patch(`${base()}/${file.id}`, { answers: { 'unit:Sucre': 'litres' } })).body.detail).toMatch(/Choose from/);
    expect((await agronomist.patch(`${base()}/${file.id}`, { answers: { depth: '3' } })).body.detail).toMatch(/is not asked about visits\.csv/);
    const answered = (await agronomist.patch(`${base()}/${file.id}`, { answers: { 'unit:Sucre': 'baume' } })).body as EarlierFileView;
    expect([answered.isRemembered, answered.summary!.readings]).toEqual([false, 2]);
    await store(file);
    const next = await sent(table('12,9'), 'next.csv');
    expect(next).toMatchObject({ isRemembered: true, summary: { readings: 1, known: 1 } });
  });

  it('is taken back as a whole with a reason; nothing is deleted, and sent again it counts again', async () => {
    const file = await sent(visits());
    await store(file);
    const [one] = await Reading.query().where({ earlierFileId: file.id });
    await agronomist.put(`/api/estates/${estate.estateId}/readings/${one!.id}/exclusion`, { reason: 'Wrong bunch' });
    expect((await agronomist.post(`${base()}/${file.id}/take-back`, { reason: '' })).status).toBe(422);
    const back = await agronomist.post(`${base()}/${file.id}/take-back`, { reason: 'Rows were counted from the wrong side' });
    expect(back.body).toMatchObject({ state: 'takenBack', takenBackBy: 'Ana Roca', takenBackReason: 'Rows were counted from the wrong side' });
    const readings = await Reading.query();
    expect([readings.length, readings.filter(({ excludedReason }) => excludedReason === 'Rows were counted from the wrong side').length, readings.find(({ id }) => id === one!.id)!.excludedReason]).toEqual([120, 119, 'Wrong bunch']);
    expect((await agronomist.post(`${base()}/${file.id}/take-back`, { reason: 'Once more' })).status).toBe(409);
    const again = await sent(visits());
    expect(again.id).not.toBe(file.id);
    await store(again);
    expect([await Reading.query().resultSize(), await Reading.query().whereNull('excludedReason').resultSize()]).toEqual([240, 120]);
  });

  it('is kept byte for byte, and nobody of another estate reaches it', async () => {
    const text = visits();
    const file = await sent(text);
    const original = await agronomist.get(`${base()}/${file.id}/original`).buffer(true).parse((response, done) => {
      const parts: Buffer[] = [];
      response.on('data', (part: Buffer) => parts.push(part)).on('end', () => done(null, Buffer.concat(parts)));
    });
    expect((original.body as Buffer).equals(Buffer.from(text))).toBe(true);
    const elsewhere = await app.addEstate('Elsewhere');
    const stranger = await app.as(elsewhere.ownerEmail);
    const theirs = `/api/estates/${elsewhere.estateId}/earlier-readings/${file.id}`;
    expect((await stranger.get(theirs)).status).toBe(404);
    expect((await stranger.post(`${theirs}/store`, { leaveOut: 0 })).status).toBe(404);
    expect((await stranger.post(`${theirs}/take-back`, { reason: 'Not mine' })).status).toBe(404);
    expect((await stranger.get(`${theirs}/original`)).status).toBe(404);
    expect(await Reading.query().resultSize()).toBe(0);
  });

  it('that is none, too long or of nothing known is refused with the way out, and not kept', async () => {
    const before = files.kept().length;
    expect((await send('%PDF-1.7 visits', { name: 'visits.pdf' })).body.detail).toMatch(/visits\.pdf.*PDF/);
    expect((await send(`row,vine,date,brix\n${'1,1,2024-09-04,22\n'.repeat(20_001)}`)).body.detail).toMatch(/20000 is the most.*one file a season/);
    expect(files.kept()).toHaveLength(before);
    expect((await store(await sent('row,vine,date,depth of water\n1,1,2024-09-04,deep\n1,2,2024-09-04,deep\n'))).body.detail).toMatch(/gives no reading/);
  });
});
