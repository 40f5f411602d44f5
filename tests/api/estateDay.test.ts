import { afterAll, beforeAll, expect, it } from 'vitest';
import { estateDay } from '../../server/ground/estateDay.ts';
import { Estate } from '../../server/models/Estate.ts';
import { startTestApp, type TestApp } from './support/testApp.ts';

let app: TestApp;
beforeAll(async () => {
  app = await startTestApp();
});
afterAll(() => app.close());

/** Offsets in December: Auckland +13 h (IANA time zone database), Los Angeles −8 h. */
it.each([
  ['Pacific/Auckland', '2026-12-01T12:00:00Z', '2026-12-02'],
  ['America/Los_Angeles', '2026-12-01T07:59:00Z', '2026-11-30'],
  ['America/Los_Angeles', '2026-12-01T08:00:00Z', '2026-12-01'],
  ['UTC', '2026-12-01T23:59:59Z', '2026-12-01'],
])('the day at %s when it is %s', async (timeZone, now, day) => {
  const { estateId } = await app.addEstate();
  await Estate.query().findById(estateId).patch({ timeZone });
  expect(await estateDay(estateId, new Date(now))).toBe(day);
});

it('the session says by which clock the estate’s days begin', async () => {
  const { estateId, ownerEmail } = await app.addEstate();
  await Estate.query().findById(estateId).patch({ timeZone: 'Pacific/Auckland' });
  const owner = await app.as(ownerEmail);
  const { estates } = (await owner.get('/api/session')).body as { estates: { id: string; timeZone: string }[] };
  expect(estates.find(({ id }) => id === estateId)?.timeZone).toBe('Pacific/Auckland');
});
