import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { MeasureView } from '../../shared/contracts/measures.ts';
import type { RipeningView } from '../../shared/contracts/results.ts';
import { makeZonedBlock, type ZonedBlock } from './support/makeZonedBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let estate: Awaited<ReturnType<TestApp['addEstate']>>;
let owner: Agent;
let block: ZonedBlock;
const readings = [22.0, 22.4, 22.8].map((value) => ({ id: randomUUID(), value }));

const dayAgo = (days: number) => new Date(Date.now() - days * 86_400_000).toISOString().slice(0, 10);
const base = () => `/api/estates/${estate.estateId}`;
const shown = async (known = '') => (await owner.get(`${base()}/blocks/${block.blockId}/ripening${known && `?known=${known}`}`)).body as RipeningView;
const sugar = ({ values }: RipeningView) => values.find(({ measure, zone }) => measure === 'brix' && zone === 1)!;
/** Everything was entered five days ago; what follows is done today. */
const putBack = () => app.knex.raw(`
  update readings set received_at = received_at - interval '5 days';
  update zonings set published_at = now() - interval '30 days';
  update weather_days set entered_at = entered_at - interval '5 days';
`);
const read = (values: readonly { id: string; value: number; supersedes?: string }[]) => {
  const vines = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === 1);
  return owner.post(`${base()}/readings`, { readings: values.map(({ id, value, supersedes }, at) => {
    const vine = vines[100 + at * 37]!;
    return { id, value, ...(supersedes ? { supersedes } : {}), blockId: block.blockId, rowId: block.ground.stored[block.ground.vines.row[vine]!]!.id, ordinal: block.ground.vines.ordinal[vine], measureCode: 'brix', unit: '°Brix', takenAt: '2026-09-10T08:00:00Z' };
  }) });
};
const weather = (day: string, rainMm: number) => owner.write('put', `${base()}/weather`).send({ day, maxC: 30, minC: 16, rainMm });

beforeAll(async () => {
  app = await startTestApp();
  estate = await app.addEstate('As known');
  block = await makeZonedBlock({ estateId: estate.estateId, personId: estate.ownerId }, { name: 'West Plot' });
  owner = await app.as(estate.ownerEmail);
  await read(readings);
  await weather('2026-09-09', 14);
  await weather('2026-09-10', 0);
  await putBack();
});
afterAll(() => app.close());

describe('ripeness as it was known', () => {
  it('keeps every figure through what was put right later', async () => {
    const before = await shown();
    expect(before.conditions[0]).toMatchObject({ rainMm: 14, flags: ['rain'] });
    expect(before.heat!.sum).toBe(26);

    await read([{ id: randomUUID(), value: 24.0, supersedes: readings[0]!.id }]);
    await owner.write('put', `${base()}/readings/${readings[2]!.id}/exclusion`).send({ reason: 'Wrong vine' });
    await weather('2026-09-09', 0);
    await owner.write('delete', `${base()}/weather/2026-09-10`);
    const { id } = ((await owner.get(`${base()}/measures`)).body.items as MeasureView[]).find(({ code }) => code === 'brix')!;
    await owner.write('patch', `${base()}/measures/${id}`).send({ confidence: 0.9 });
    await owner.write('patch', `${base()}/measures/${id}`).send({ confidence: 0.99, margin: 0.2 });

    await owner.write('put', `${base()}/alcohol-method`).send({ method: 'sugarTable' });
    await owner.write('patch', base()).send({ settings: { costPerHour: 31 } });
    await owner.write('patch', base()).send({ settings: { costPerHour: 40, currency: 'CHF' } });

    const now = await shown();
    expect(now.settings).toEqual({ costPerHour: 40, currency: 'CHF', alcoholMethod: 'sugarTable' });
    expect(sugar(now)).toMatchObject({ n: 2, confidence: 0.99, margin: 0.2 });
    expect(sugar(now).mean).toBeCloseTo(23.2, 10);
    expect(now.conditions[0]).toMatchObject({ rainMm: 0, flags: [] });
    expect(now.heat!.sum).toBe(13);

    const then = await shown(dayAgo(2));
    expect(sugar(then)).toEqual(sugar(before));
    expect(then.settings).toEqual({ costPerHour: 25, currency: 'EUR', alcoholMethod: 'brixFactor' });
    expect(then.measures).toEqual(before.measures);
    expect(then.conditions).toEqual(before.conditions);
    expect(then.heat!.sum).toBe(26);
  });

  it('knows nothing of weather before it was entered', async () => {
    const long = await app.knex('weather_days').where({ estateId: estate.estateId }).count();
    expect(Number(long[0]!.count)).toBe(1);
    expect((await shown(dayAgo(10))).heat).toBeNull();
    expect((await shown('2066-01-01')).heat).toEqual((await shown()).heat);
  });
});
