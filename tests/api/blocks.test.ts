import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { roles, type Role } from '../../shared/catalog/roles.ts';
import { may, type Permission, type Reach } from '../../shared/catalog/permissions.ts';
import { AuditEntry } from '../../server/models/AuditEntry.ts';
import { Block } from '../../server/models/Block.ts';
import { EntryRestriction } from '../../server/models/EntryRestriction.ts';
import { Reading } from '../../server/models/Reading.ts';
import { Season } from '../../server/models/Season.ts';
import type { BlockRowsView } from '../../shared/contracts/rows.ts';
import { lonLatAt, outline, rectangle } from './support/shapes.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let owner: Agent;
const base = () => `/api/estates/${estate.estateId}`;

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('Slow Terrace');
  owner = await app.as(estate.ownerEmail);
});
afterAll(() => app.close());

let serial = 0;
/** A block of 100 by 60 m, rows west to east every 2.5 m, vines every 1.5 m: 24 rows of 66 vines (computed with shapely, see the row tests). */
async function addBlock(facts: object = {}): Promise<{ id: string; version: number; [fact: string]: unknown }> {
  serial += 1;
  const answer = await owner.post(`${base()}/blocks`, { name: `Block ${serial}`, boundary: rectangle({ x: serial * 200 }), rowBearingDeg: 90.8, rowSpacingM: 2.5, vineSpacingM: 1.5, ...facts });
  expect(answer.status, answer.text).toBe(201);
  return answer.body;
}

describe('making a block', () => {
  it('answers with area, rows and vines, and the next request shows the same', async () => {
    const made = await addBlock({ name: 'First Shelf', variety: 'Mencía', rowBearingDeg: 0, boundary: rectangle() });
    expect(made).toMatchObject({ name: 'First Shelf', variety: 'Mencía', version: 1, epsg: 32630, warnings: [] });
    expect(made.areaHa).toBeCloseTo(0.6, 4);
    const read = await owner.get(`${base()}/blocks/${made.id}`);
    expect(read.headers.etag).toMatch(/^"1\./);
    expect(read.body.areaHa).toBeCloseTo(0.6, 4);
    const rows = (await owner.get(`${base()}/blocks/${made.id}/rows`)).body;
    expect(rows.total).toBe(read.body.rowTotal);
    expect(rows.items.reduce((sum: number, row: { vineCount: number }) => sum + row.vineCount, 0)).toBe(read.body.vines.places);
    expect(rows.items.map((row: { label: string }) => row.label)).toEqual(rows.items.map((_: unknown, i: number) => String(i + 1)));
  });

  it('lays 24 rows of 66 vines on a 100 by 60 m block with 2.5 and 1.5 m', async () => {
    // The grid bearing is 90° when the true bearing is 90° plus the convergence, about 0.811° at this place.
    const made = await addBlock({ rowBearingDeg: 90.8111 });
    expect(made).toMatchObject({ rowTotal: 24, vines: { places: 1584, living: 1584, missing: 0, census: 'unknown' } });
  });

  it('warns of an overlap with another block and keeps both', async () => {
    const first = await addBlock({ name: 'Under' });
    const second = await addBlock({ name: 'Over', boundary: rectangle({ x: serial * 200 + 50 }) });
    const [warning] = second.warnings as { code: string; block: string; blockId: string; areaHa: number }[];
    expect(warning).toMatchObject({ code: 'overlaps', block: 'Under', blockId: first.id });
    // 50 by 60 m are shared; on the ellipsoid about 0.06 % more than on the plane.
    expect(warning!.areaHa).toBeCloseTo(0.3, 3);
  });

  it('asks when the book says another area', async () => {
    const made = await addBlock({ bookAreaHa: 0.7 });
    expect(made.warnings).toMatchObject([{ code: 'bookDiffers', bookAreaHa: 0.7 }]);
    expect((await addBlock({ bookAreaHa: 0.61 })).warnings).toEqual([]);
  });

  it('tells of an outline far from the estate', async () => {
    const far = { type: 'Polygon', coordinates: [[[10, 45], [10.002, 45], [10.002, 45.001], [10, 45.001], [10, 45]]] };
    const check = await owner.post(`${base()}/blocks/check`, { boundary: far });
    expect(check.body.warnings).toMatchObject([{ code: 'farFromEstate' }]);
    // From 1.8° W, 42.5° N to 10° E, 45° N; great circle on a sphere of 6371 km: 990 km.
    expect(check.body.warnings[0].distanceKm).toBeGreaterThan(970);
    expect(check.body.warnings[0].distanceKm).toBeLessThan(1010);
    expect(await Block.query().where({ estateId: estate.estateId, name: 'far' }).resultSize()).toBe(0);
  });

  it('refuses a name that is taken, in other letters too', async () => {
    await addBlock({ name: 'Kiln' });
    const again = await owner.post(`${base()}/blocks`, { name: 'KILN', boundary: rectangle({ x: -500 }) });
    expect(again.status).toBe(409);
    expect(again.body).toMatchObject({ code: 'nameTaken', detail: expect.stringContaining('KILN') });
  });

  it.each([
    ['an outline that crosses itself', { boundary: outline([[0, 0], [100, 60], [100, 0], [0, 60]]) }, 'outlineCrosses', /crosses itself near 42\.5\d+° N, 1\.8\d+° W/],
    ['a hole outside the outline', { boundary: { type: 'Polygon', coordinates: [rectangle().coordinates[0], rectangle({ x: 300, width: 20, height: 20 }).coordinates[0]] } }, 'outlineInvalid', /hole lies outside shell/],
    ['an outline in metres', { boundary: { type: 'Polygon', coordinates: [[[598400, 4707000], [598500, 4707000], [598500, 4707060], [598400, 4707000]]] } }, 'badInput', /boundary/],
    ['an outline of some square metres', { boundary: rectangle({ width: 4, height: 4 }) }, 'outlineTooSmall', /16\.0 m²/],
    ['an outline of a county', { boundary: rectangle({ width: 9000, height: 9000 }) }, 'outlineTooLarge', /8100 ha/],
    ['no outline', {}, 'badInput', /boundary/],
    ['no name', { name: '  ', boundary: rectangle() }, 'badInput', /name/],
    ['rows a millimetre apart', { boundary: rectangle(), rowSpacingM: 0.001 }, 'badInput', /rowSpacingM/],
    ['a bearing that is no number', { boundary: rectangle(), rowBearingDeg: 'north' }, 'badInput', /rowBearingDeg/],
    ['a colour nobody can name', { boundary: rectangle(), startPostColour: 'mauve-ish' }, 'badInput', /startPostColour/],
  ])('refuses %s and saves nothing', async (_what, body, code, words) => {
    const before = await Block.query().resultSize();
    const answer = await owner.post(`${base()}/blocks`, { name: 'Refused', ...body });
    expect(answer.status, answer.text).toBe(422);
    expect(answer.body.code).toBe(code);
    expect(answer.body.detail).toMatch(words);
    expect(await Block.query().resultSize()).toBe(before);
  });
});

describe('changing a block', () => {
  it('needs the version it was made on, and refuses an old one with the present state', async () => {
    const block = await addBlock();
    const path = `${base()}/blocks/${block.id}`;
    expect((await owner.patch(path, { variety: 'Albillo' })).status).toBe(428);
    const changed = await owner.write('patch', path).set('if-match', '"1"').send({ variety: 'Albillo' });
    expect(changed.headers.etag).toMatch(/^"2\./);
    const late = await owner.write('patch', path).set('if-match', '"1"').send({ variety: 'Garnacha' });
    expect(late.status).toBe(412);
    expect(late.body.current).toMatchObject({ version: 2, variety: 'Albillo' });
  });

  it('is not said to be unchanged when only its vines changed, and takes its own tag back as a condition', async () => {
    const block = await addBlock();
    const path = `${base()}/blocks/${block.id}`;
    const before = await owner.get(`${path}/rows`);
    const same = await owner.get(`${path}/rows`).set('if-none-match', before.headers.etag!);
    expect(same.status).toBe(304);
    await owner.put(`${path}/vines`, { marks: [{ rowId: before.body.items[0].id, ordinal: 2, state: 'missing' }] });
    const after = await owner.get(`${path}/rows`).set('if-none-match', before.headers.etag!);
    expect(after.status).toBe(200);
    expect(after.body.items[0].vines).toHaveLength(1);
    const tag = (await owner.get(path)).headers.etag!;
    expect((await owner.write('patch', path).set('if-match', tag).send({ variety: 'Albillo' })).status).toBe(200);
    expect((await owner.write('patch', path).set('if-match', tag).send({ variety: 'Garnacha' })).status).toBe(412);
  });

  it('keeps the identity of rows and marked vines when the block grows', async () => {
    const x = (serial + 1) * 200;
    const block = await addBlock({ rowBearingDeg: 90.8111 });
    const before = (await owner.get(`${base()}/blocks/${block.id}/rows`)).body.items as { id: string; label: string }[];
    await owner.put(`${base()}/blocks/${block.id}/vines`, { marks: [{ rowId: before[3]!.id, ordinal: 5, state: 'missing' }] });
    // Ten metres to the south: four more rows on the high side; the rows that were there stay.
    const grown = await owner.write('patch', `${base()}/blocks/${block.id}`).set('if-match', '"1"').send({ boundary: rectangle({ x, y: -10, height: 70 }) });
    expect(grown.body.rowEffects).toEqual({ kept: 24, made: 4, retired: 0, marksLost: 0 });
    const after = (await owner.get(`${base()}/blocks/${block.id}/rows`)).body.items as { id: string; vines: object[] }[];
    expect(after.slice(0, 24).map((row) => row.id)).toEqual(before.map((row) => row.id));
    expect(after[3]!.vines).toEqual([{ ordinal: 5, state: 'missing', proposed: false }]);
    expect(grown.body.gridKey).not.toBe(block.gridKey);
  });

  it('keeps a marked vine on its place when the row is lengthened at its start', async () => {
    const x = (serial + 1) * 200;
    const block = await addBlock({ rowBearingDeg: 90.8111 });
    const { id } = (await owner.get(`${base()}/blocks/${block.id}/rows`)).body.items[0];
    await owner.put(`${base()}/blocks/${block.id}/vines`, { marks: [{ rowId: id, ordinal: 1, state: 'dead' }] });
    await owner.write('patch', `${base()}/blocks/${block.id}`).set('if-match', '"1"').send({ boundary: rectangle({ x: x - 15, width: 115 }) });
    const [row] = (await owner.get(`${base()}/blocks/${block.id}/rows`)).body.items;
    expect(row.id).toBe(id);
    // Fifteen metres are ten vines of 1.5 m.
    expect(row.pieces[0].firstVine).toBe(-9);
    expect(row.vines).toEqual([{ ordinal: 1, state: 'dead', proposed: false }]);
  });

  it('retires rows that are gone and never deletes them', async () => {
    const x = (serial + 1) * 200;
    const block = await addBlock({ rowBearingDeg: 90.8111 });
    const shrunk = await owner.write('patch', `${base()}/blocks/${block.id}`).set('if-match', '"1"').send({ boundary: rectangle({ x, height: 30, y: 30 }) });
    expect(shrunk.body.rowEffects).toEqual({ kept: 12, made: 0, retired: 12, marksLost: 0 });
    const { rows } = (await app.knex.raw('select count(*) filter (where retired_at is null) as open, count(*) as all from block_rows where block_id = ?', [block.id])) as { rows: [{ open: number; all: number }] };
    expect(rows[0]).toEqual({ open: 12, all: 24 });
  });

  it('gives a row a new identity when its vines are counted anew and readings refer to the old ones', async () => {
    const block = await addBlock({ rowBearingDeg: 90.8111 });
    const before = (await owner.get(`${base()}/blocks/${block.id}/rows`)).body.items as { id: string }[];
    const season = await Season.query().findOne({ estateId: estate.estateId }).throwIfNotFound();
    await Reading.query().insert({ id: randomUUID(), estateId: estate.estateId, seasonId: season.id, blockId: block.id, rowId: before[0]!.id, ordinal: 40, measureCode: 'clusterCount', value: 21, unit: 'clusters', takenAt: new Date(), source: 'field' } as never);
    await owner.put(`${base()}/blocks/${block.id}/vines`, { marks: [{ rowId: before[0]!.id, ordinal: 1, state: 'missing' }, { rowId: before[1]!.id, ordinal: 33, state: 'missing' }] });
    // 66 vines of 1.5 m become 90 of 1.1 m: (100 - 1.1) / 1.1 = 89.9.
    const asked = await owner.write('patch', `${base()}/blocks/${block.id}`).set('if-match', '"1"').send({ vineSpacingM: 1.1 });
    expect(asked.status).toBe(409);
    expect(asked.body).toMatchObject({ code: 'rowsAtStake', atStake: { surveyed: false, retired: 1, referred: 1 } });
    const changed = await owner.write('patch', `${base()}/blocks/${block.id}`).set('if-match', '"1"').send({ vineSpacingM: 1.1, rowsMayGo: true });
    expect(changed.body.rowEffects).toMatchObject({ kept: 23, made: 1, retired: 1 });
    const after = (await owner.get(`${base()}/blocks/${block.id}/rows`)).body.items as { id: string; vineCount: number }[];
    expect(after[0]!.id).not.toBe(before[0]!.id);
    expect(after[1]!.id).toBe(before[1]!.id);
    expect(after.map((row) => row.vineCount)).toEqual(Array.from({ length: 24 }, () => 90));
    const reading = await Reading.query().findOne({ blockId: block.id }).throwIfNotFound();
    expect(reading).toMatchObject({ rowId: before[0]!.id, ordinal: 40 });
  });

  it('leaves rows alone when only words change', async () => {
    const block = await addBlock();
    const changed = await owner.write('patch', `${base()}/blocks/${block.id}`).set('if-match', '"1"').send({ notes: 'Old drain in the east.' });
    expect(changed.body).toMatchObject({ rowEffects: null, jobId: null, notes: 'Old drain in the east.' });
    const entry = await AuditEntry.query().findOne({ subjectId: block.id, action: 'block.change' });
    expect(entry).toMatchObject({ before: { notes: '' }, after: { notes: 'Old drain in the east.' } });
  });

  it('leaves a line in the block’s own history, and in nobody else’s', async () => {
    const [one, other] = [await addBlock(), await addBlock()];
    await owner.write('patch', `${base()}/blocks/${one.id}`).set('if-match', '"1"').send({ trellis: 'wires' });
    const actions = async (id: string) => (await owner.get(`${base()}/audit?subject=${id}`)).body.items.map((item: { action: string }) => item.action);
    expect(await actions(one.id)).toEqual(['block.change', 'block.create']);
    expect(await actions(other.id)).toEqual(['block.create']);
    expect((await owner.get(`${base()}/audit?subject=everything`)).status).toBe(422);
  });

  it('refuses a crossing outline and keeps the old one', async () => {
    const block = await addBlock();
    const answer = await owner.write('patch', `${base()}/blocks/${block.id}`).set('if-match', '"1"').send({ variety: 'X', boundary: outline([[0, 0], [100, 60], [100, 0], [0, 60]]) });
    expect(answer.status).toBe(422);
    expect((await owner.get(`${base()}/blocks/${block.id}`)).body).toMatchObject({ version: 1, variety: '' });
  });

  it('retires a block, frees its name, and answers 404 from then on', async () => {
    const block = await addBlock({ name: 'Old Garth' });
    expect((await owner.write('delete', `${base()}/blocks/${block.id}`).set('if-match', '"1"')).status).toBe(204);
    expect((await owner.get(`${base()}/blocks/${block.id}`)).status).toBe(404);
    expect((await owner.get(`${base()}/blocks`)).body.items.map((item: { name: string }) => item.name)).not.toContain('Old Garth');
    await addBlock({ name: 'Old Garth' });
  });
});

describe('numbering', () => {
  it('starts at the corner that was tapped and tells the number before', async () => {
    const x = (serial + 1) * 200;
    const block = await addBlock({ rowBearingDeg: 90.8111 });
    const rows = (await owner.get(`${base()}/blocks/${block.id}/rows`)).body;
    const tapped = await owner.write('put', `${base()}/blocks/${block.id}/rows`).set('if-match', '"1"').send({ corner: lonLatAt(x + 100, 0) });
    expect(tapped.body.numbering).toEqual({ rowOneSide: 'high', vineOneEnd: 'end', firstRowLabel: 1 });
    expect(tapped.body.items.map((row: { label: string }) => row.label)).toEqual(Array.from({ length: 24 }, (_, i) => String(24 - i)));
    expect(tapped.body.items[10]).toMatchObject({ id: rows.items[10].id, label: '14', labelWas: '11' });
  });

  it('can begin at another number', async () => {
    const block = await addBlock({ rowBearingDeg: 90.8111 });
    const answer = await owner.write('put', `${base()}/blocks/${block.id}/rows`).set('if-match', '"1"').send({ firstRowLabel: 101 });
    expect(answer.body.items[0]).toMatchObject({ label: '101', labelWas: '1' });
    expect((await owner.write('put', `${base()}/blocks/${block.id}/rows`).set('if-match', '"2"').send({})).status).toBe(422);
  });
});

describe('the vine census', () => {
  it('counts what is marked, and a table speaks in the numbers people count', async () => {
    const block = await addBlock({ rowBearingDeg: 90.8111, vineOneEnd: 'end' });
    const path = `${base()}/blocks/${block.id}/vines`;
    const pasted = await owner.put(path, { table: 'row;vine;state\n1;1;missing\n1;66;Retancha\n24;10;dead\n', complete: true });
    expect(pasted.body, pasted.text).toMatchObject({ changed: 3, counts: { places: 1584, living: 1582, missing: 1, dead: 1, replant: 1, census: 'full' } });
    const { items } = (await owner.get(`${base()}/blocks/${block.id}/rows`)).body;
    // Vine 1 stands at the far end of a row of 66.
    expect(items[0].vines).toEqual([{ ordinal: 1, state: 'replant', proposed: false }, { ordinal: 66, state: 'missing', proposed: false }]);
    const taken = await owner.put(path, { marks: [{ rowId: items[0].id, ordinal: 66, state: 'living' }] });
    expect(taken.body.counts).toMatchObject({ missing: 0, census: 'full' });
  });

  it.each([
    ['a row that is not there', '1;1;missing\n99;1;missing', /line 2: there is no row 99/],
    ['a vine beyond the row', '2;67;missing', /row 2 has vines 1 to 66, not 67/],
    ['a word nobody knows', '2;6;gone fishing', /"gone fishing" is no state/],
    ['two columns', '2;6', /three columns are needed/],
    ['nothing', '   \n', /empty/],
  ])('refuses a table with %s and saves none of it', async (_what, table, words) => {
    const block = await addBlock({ rowBearingDeg: 90.8111 });
    const answer = await owner.put(`${base()}/blocks/${block.id}/vines`, { table });
    expect(answer.status).toBe(422);
    expect(answer.body.detail).toMatch(words);
    expect((await owner.get(`${base()}/blocks/${block.id}`)).body.vines).toMatchObject({ missing: 0, census: 'unknown' });
  });

  it('takes a mark of crew as a proposal that others take over', async () => {
    const block = await addBlock({ rowBearingDeg: 90.8111 });
    const path = `${base()}/blocks/${block.id}/vines`;
    const crew = await app.as((await app.addPerson(estate.estateId, 'crew')).email);
    const { items } = (await owner.get(`${base()}/blocks/${block.id}/rows`)).body;
    const mark = (ordinal: number, state: string) => ({ marks: [{ rowId: items[0].id, ordinal, state }] });
    expect((await crew.put(path, mark(7, 'missing'))).body).toMatchObject({ changed: 1, counts: { missing: 0, living: 1584, proposed: 1, census: 'unknown' } });
    const proposals = async (who: Agent) => ((await who.get(`${base()}/blocks/${block.id}/rows`)).body as BlockRowsView).items.flatMap(({ vines }) => vines.filter(({ proposed }) => proposed));
    expect(await proposals(owner)).toMatchObject([{ ordinal: 7, state: 'missing', noted: { by: expect.any(String) as string, at: expect.stringMatching(/^\d{4}-/u) as string } }]);
    expect(await proposals(crew)).toEqual([{ ordinal: 7, state: 'missing', proposed: true }]);
    expect((await owner.put(path, mark(7, 'missing'))).body.counts).toMatchObject({ missing: 1, proposed: 0, census: 'partial' });
    expect((await crew.put(path, mark(7, 'replant'))).body).toMatchObject({ changed: 0, skipped: 1 });
    expect((await crew.put(path, mark(7, 'living'))).body.changed).toBe(0);
    expect((await crew.put(path, { marks: [], complete: true })).status).toBe(403);
  });

  it('refuses a vine or row that is not of this block', async () => {
    const [one, other] = [await addBlock({ rowBearingDeg: 90.8111 }), await addBlock({ rowBearingDeg: 90.8111 })];
    const foreign = (await owner.get(`${base()}/blocks/${other.id}/rows`)).body.items[0].id as string;
    const own = (await owner.get(`${base()}/blocks/${one.id}/rows`)).body.items[0].id as string;
    for (const mark of [{ rowId: foreign, ordinal: 1 }, { rowId: own, ordinal: 67 }, { rowId: own, ordinal: 0 }]) {
      expect((await owner.put(`${base()}/blocks/${one.id}/vines`, { marks: [{ ...mark, state: 'missing' }] })).status).toBe(422);
    }
  });
});

describe('the ledger of blocks', () => {
  it('shows the restriction that ends last, and nothing that is over or lifted', async () => {
    const block = await addBlock();
    const hour = 3_600_000;
    const at = (hours: number) => new Date(Date.now() + hours * hour);
    const set = (facts: object) => EntryRestriction.query().insert({ estateId: estate.estateId, blockId: block.id, product: 'Sulphur', labelInterval: '24 h', setBy: estate.ownerId, startsAt: at(-2), endsAt: at(4), ...facts } as never);
    const line = async () => ((await owner.get(`${base()}/blocks`)).body.items as { id: string }[]).find((item) => item.id === block.id);
    expect(await line()).toMatchObject({ restriction: null, noPickBefore: null, zoning: null, nextRound: null, lastReadingAt: null, layerTotal: 0 });
    await set({ product: 'Copper' });
    await set({ endsAt: at(30), noPickBefore: at(24 * 12).toISOString().slice(0, 10) });
    await set({ startsAt: at(-60), endsAt: at(-50), product: 'Over' });
    await set({ endsAt: at(90), product: 'Lifted', liftedAt: at(-1), liftedBy: estate.ownerId, liftedReason: 'wrong block' });
    expect(await line()).toMatchObject({ restriction: { product: 'Sulphur' }, noPickBefore: at(24 * 12).toISOString().slice(0, 10) });
  });

  it('asks the database the same number of questions for two blocks as for many', async () => {
    let asked = 0;
    const count = () => (asked += 1);
    const other = await app.addEstate('Counted');
    const agent = await app.as(other.ownerEmail);
    const questions = async () => {
      asked = 0;
      app.knex.on('query', count);
      await agent.get(`/api/estates/${other.estateId}/blocks`);
      app.knex.removeListener('query', count);
      return asked;
    };
    await agent.post(`/api/estates/${other.estateId}/blocks`, { name: 'A', boundary: rectangle() });
    const few = await questions();
    for (const name of ['B', 'C', 'D']) await agent.post(`/api/estates/${other.estateId}/blocks`, { name, boundary: rectangle({ y: 300 }) });
    expect(await questions()).toBe(few);
  });
});

describe('who may', () => {
  const byRole = new Map<Role, Agent>();
  let stranger: Agent;
  let strangersEstate: string;
  beforeAll(async () => {
    for (const role of roles) byRole.set(role, await app.as((await app.addPerson(estate.estateId, role)).email));
    const other = await app.addEstate();
    strangersEstate = other.estateId;
    stranger = await app.as(other.ownerEmail);
  });

  const acts: [string, Permission, Reach, (path: string) => [method: 'get' | 'post' | 'put' | 'patch' | 'delete', path: string, body?: object]][] = [
    ['see blocks', 'estate.see', 'read', () => ['get', '/blocks']],
    ['see a block', 'estate.see', 'read', (block) => ['get', block]],
    ['see rows', 'estate.see', 'read', (block) => ['get', `${block}/rows`]],
    ['make a block', 'blocks.edit', 'do', () => ['post', '/blocks', { name: '' }]],
    ['check an outline', 'blocks.edit', 'propose', () => ['post', '/blocks/check', {}]],
    ['change a block', 'blocks.edit', 'do', (block) => ['patch', block, { name: '' }]],
    ['retire a block', 'blocks.edit', 'do', (block) => ['delete', block]],
    ['renumber rows', 'rows.renumber', 'do', (block) => ['put', `${block}/rows`, {}]],
    ['mark vines', 'census.edit', 'propose', (block) => ['put', `${block}/vines`, {}]],
  ];

  it.each(acts)('%s: every role as the matrix says, and strangers find nothing', async (_what, permission, atLeast, act) => {
    const block = `/blocks/${(await addBlock()).id}`;
    for (const [role, agent] of byRole) {
      const [method, path, body] = act(block);
      // Reads go through, writes stop at their body or version: 403 is told apart from every other answer.
      const { status } = method === 'get' ? await agent.get(`${base()}${path}`) : await agent[method](`${base()}${path}`, body);
      expect([role, status === 403]).toEqual([role, !may([role], permission, atLeast)]);
      expect(status).toBeLessThan(500);
    }
    const [method, path, body] = act(block);
    expect((await (method === 'get' ? stranger.get(`${base()}${path}`) : stranger[method](`${base()}${path}`, body))).status).toBe(404);
  });

  it('a block of another estate is not found in one’s own', async () => {
    const block = await addBlock();
    const agent = stranger;
    const foreign = `/api/estates/${strangersEstate}/blocks/${block.id}`;
    expect((await agent.get(foreign)).status).toBe(404);
    expect((await agent.get(`${foreign}/rows`)).status).toBe(404);
    expect((await agent.write('patch', foreign).set('if-match', '"1"').send({ name: 'Mine' })).status).toBe(404);
    expect((await agent.write('delete', foreign).set('if-match', '"1"')).status).toBe(404);
    expect((await agent.write('put', `${foreign}/rows`).set('if-match', '"1"').send({ firstRowLabel: 2 })).status).toBe(404);
    expect((await agent.put(`${foreign}/vines`, { marks: [] })).status).toBe(404);
    expect((await agent.get(`/api/estates/${strangersEstate}/blocks/not-an-id`)).status).toBe(404);
  });
});
