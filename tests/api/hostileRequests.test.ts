import { afterAll, beforeAll, expect, it } from 'vitest';
import { routesOf, type ServedRoute } from './support/routesOf.ts';
import { startTestApp, type TestApp } from './support/testApp.ts';

/** Whatever is sent to a door, the answer is a sentence and never a fault of ours: every served route, with bodies and queries that nobody means. */

let app: TestApp;
beforeAll(async () => {
  app = await startTestApp();
});
afterAll(() => app.close());

const unknown = '00000000-0000-4000-8000-000000000000';
const bodies: readonly object[] = [
  {},
  [],
  { name: null, items: {}, rows: 'x', revision: -1 },
  { name: 'nul \u0000 inside', reason: '\ud800', note: '\u0000', title: '\u0000', email: '\u0000@x.example' },
  { name: 'x'.repeat(50_000), value: 1e308, date: '9999-99-99', onDate: '2026-02-30', lotId: unknown, blockIds: [unknown], zones: [1e9] },
  { boundary: { type: 'Polygon', coordinates: [] }, marker: { type: 'Point', coordinates: ['a', null] }, items: Array.from({ length: 30 }, () => ({})) },
  JSON.parse('{"__proto__":{"a":1},"constructor":1,"toString":null}') as object,
];
const queries = ['', '?page=-1&limit=1e9&q=%00', '?date=2026-99-99&from=x&to=y&measure=__proto__&block=%27&zones=99&with=zz&format=exe&paper=a9&asOf=abc', '?q[]=1&q[a]=2&block[]=1&measure=a&measure=b'];
/** Doors that end the session which asks, or wait on purpose. */
const isLeftOut = ({ method, path }: ServedRoute) => method === 'all' || /session|sessions|password|events/.test(path) || (method === 'delete' && path === '/');

it('answers every route in words, never with a fault', async () => {
  const { estateId, ownerEmail } = await app.addEstate('Marl hostile');
  const owner = await app.as(ownerEmail);
  const faults: string[] = [];
  let asked = 0;
  for (const route of routesOf(app.server).filter((one) => !isLeftOut(one))) {
    for (const id of [unknown, encodeURIComponent(`x'%00"`)]) {
      const path = `${route.belowEstate ? `/api/estates/${estateId}` : '/api'}${route.path.replace(/:\w+/g, id)}`;
      const tries = route.method === 'get' ? queries.map((query) => owner.get(path + query)) : bodies.map((body) => owner.write(route.method as 'post', path).set('if-match', '"1"').send(body));
      for (const answer of await Promise.all(tries)) {
        asked++;
        if (answer.status >= 500) faults.push(`${route.method} ${path}: ${answer.status}`);
      }
    }
  }
  expect(asked).toBeGreaterThan(1000);
  expect(faults).toEqual([]);
}, 180_000);
