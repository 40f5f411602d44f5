import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { may, type Permission, type Reach } from '../../shared/catalog/permissions.ts';
import { roles, type Role } from '../../shared/catalog/roles.ts';
import { routesOf } from './support/routesOf.ts';
import { layOneOfEach, notIds, tableOf } from './support/strangers.ts';
import { openFileStore } from '../../server/storage/fileStore.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

const nobody = '00000000-0000-4000-8000-000000000000';

interface Door {
  method: 'get' | 'post' | 'put' | 'patch' | 'delete';
  /** Path below the estate; ids that do not exist are enough, the guard comes first. */
  path: string;
  action: Permission;
  atLeast: Reach;
}

const door = (method: Door['method'], path: string, action: Permission, atLeast: Reach = 'do'): Door => ({ method, path, action, atLeast });

/** Every door of an estate with what it asks for. A new route adds its row here. */
const doors: Door[] = [
  door('get', '', 'estate.see', 'read'),
  door('patch', `/seasons/${nobody}`, 'estate.settings'),
  door('get', '/facts', 'estate.settings', 'read'),
  door('patch', '', 'estate.settings'),
  door('get', '/people', 'people.see', 'read'),
  door('put', `/people/${nobody}/roles`, 'people.manage', 'propose'),
  door('get', '/invitations', 'people.see', 'read'),
  door('post', '/invitations', 'people.manage', 'propose'),
  door('post', `/invitations/${nobody}/resend`, 'people.manage', 'propose'),
  door('delete', `/invitations/${nobody}`, 'people.manage', 'propose'),
  door('get', '/today', 'estate.see', 'read'),
  door('get', '/search?q=marl', 'estate.see', 'read'),
  door('get', '/audit', 'audit.see', 'read'),
  door('get', '/mail', 'mail.see'),
  door('get', `/jobs/${nobody}`, 'estate.see', 'read'),
  door('get', `/jobs/${nobody}/events`, 'estate.see', 'read'),
  door('delete', `/jobs/${nobody}`, 'zoning.run', 'propose'),
  door('get', '/blocks', 'estate.see', 'read'),
  door('post', '/blocks', 'blocks.edit'),
  door('post', '/blocks/check', 'blocks.edit', 'propose'),
  door('get', `/blocks/${nobody}`, 'estate.see', 'read'),
  door('patch', `/blocks/${nobody}`, 'blocks.edit'),
  door('delete', `/blocks/${nobody}`, 'blocks.edit'),
  door('get', `/blocks/${nobody}/rows`, 'estate.see', 'read'),
  door('put', `/blocks/${nobody}/rows`, 'rows.renumber'),
  door('put', `/blocks/${nobody}/vines`, 'census.edit', 'propose'),
  door('get', '/imports', 'layers.import', 'read'),
  door('post', '/imports', 'layers.import'),
  door('get', `/imports/${nobody}`, 'layers.import', 'read'),
  door('patch', `/imports/${nobody}`, 'layers.import'),
  door('post', `/imports/${nobody}/blocks`, 'blocks.edit'),
  door('delete', `/imports/${nobody}`, 'layers.import'),
  door('get', `/files/${nobody}/download`, 'layers.import', 'read'),
  door('get', `/blocks/${nobody}/layers`, 'estate.see', 'read'),
  door('get', '/relief', 'estate.see', 'read'),
  door('get', `/layers/${nobody}/cells?block=${nobody}`, 'estate.see', 'read'),
  door('patch', `/layers/${nobody}`, 'layers.import'),
  door('post', `/layers/${nobody}/override`, 'layers.override'),
  door('delete', `/layers/${nobody}`, 'layers.import'),
  door('get', `/layers/${nobody}/marks?block=${nobody}`, 'estate.see', 'read'),
  door('get', `/layers/${nobody}/aside?block=${nobody}`, 'estate.see', 'read'),
  door('get', `/layers/${nobody}/beside?block=${nobody}`, 'estate.see', 'read'),
  door('put', `/layers/${nobody}/cleaning`, 'layers.import'),
  door('post', '/imports/pieces', 'layers.import'),
  door('post', '/imports/arrived', 'layers.import'),
  door('get', '/measures', 'estate.see', 'read'),
  door('post', '/measures', 'plans.margins'),
  door('patch', `/measures/${nobody}`, 'plans.margins'),
  door('post', `/scenarios/${nobody}/apply`, 'lots.build'),
  door('delete', `/scenarios/${nobody}`, 'lots.build'),
  door('post', '/lot-moves', 'lots.build', 'propose'),
  door('post', '/lot-suggestions', 'lots.build', 'propose'),
  door('get', `/lots/${nobody}/decisions`, 'lots.see', 'read'),
  door('get', '/day-capacities', 'lots.see', 'read'),
  door('put', '/day-capacities', 'lots.build', 'propose'),
  door('put', '/alcohol-method', 'lots.confirm'),
  door('get', `/notices/${nobody}/sheet`, 'notices.acknowledge'),
  door('post', '/tickets/import', 'tickets.enter'),
  door('get', '/cellar-results', 'lots.see', 'read'),
  door('post', `/lots/${nobody}/cellar-results`, 'tickets.enter'),
  door('get', '/factors', 'lots.see', 'read'),
  door('put', '/factors', 'factors.switch'),
  door('get', `/blocks/${nobody}/season-letter`, 'review.see'),
  door('get', '/weather', 'results.see', 'read'),
  door('put', '/weather', 'weather.enter'),
  door('delete', '/weather/2026-09-01', 'weather.enter'),
  door('post', '/weather/import', 'weather.enter'),
  door('get', '/restrictions', 'restrictions.see', 'read'),
  door('post', '/restrictions', 'restrictions.set'),
  door('post', `/restrictions/${nobody}/lift`, 'restrictions.lift'),
  door('post', `/restrictions/${nobody}/pick-interval`, 'restrictions.lift'),
  door('get', '/readings', 'readings.record', 'own'),
  door('post', '/readings', 'readings.record', 'own'),
  door('put', `/readings/${nobody}/exclusion`, 'outliers.exclude'),
  door('get', '/bags', 'readings.record', 'own'),
  door('post', '/bags', 'readings.record', 'own'),
  door('post', '/bags/received', 'lab.enter'),
  door('post', '/bags/missing', 'lab.enter'),
  door('post', '/bags/expected', 'lab.enter'),
  door('post', '/bags/swap', 'labels.settle'),
  door('post', `/bags/${nobody}/settle`, 'labels.settle'),
  door('post', `/bags/${nobody}/reopen`, 'labels.settle'),
  door('get', '/conflicts', 'conflicts.settle', 'own'),
  door('post', `/conflicts/${nobody}/settle`, 'conflicts.settle', 'own'),
  door('post', `/conflicts/${nobody}/reopen`, 'conflicts.settle', 'own'),
  door('get', '/crew-code', 'people.manage', 'propose'),
  door('post', '/crew-code', 'people.manage', 'propose'),
  door('delete', '/crew-code', 'people.manage', 'propose'),
  door('post', '/crew', 'people.manage', 'propose'),
  door('put', `/crew/${nobody}/pin`, 'people.manage', 'propose'),
  door('get', '/phones', 'people.manage', 'propose'),
  door('post', '/phones/check-in', 'readings.record', 'own'),
  door('put', `/phones/${nobody}/loss`, 'people.manage', 'propose'),
  door('get', '/field-photos', 'readings.record', 'own'),
  door('post', '/field-photos', 'readings.record', 'own'),
  door('get', `/field-photos/${nobody}`, 'readings.record', 'own'),
  door('get', '/lab', 'lab.enter', 'read'),
  door('post', '/lab/results', 'lab.enter'),
  door('put', '/lab/results/state', 'results.check'),
  door('put', `/lab/results/${nobody}/exclusion`, 'outliers.exclude', 'propose'),
  door('get', '/lab/files', 'lab.enter', 'read'),
  door('post', '/lab/files', 'lab.enter'),
  door('get', `/lab/files/${nobody}`, 'lab.enter', 'read'),
  door('patch', `/lab/files/${nobody}`, 'lab.enter'),
  door('post', `/lab/files/${nobody}/store`, 'lab.enter'),
  door('delete', `/lab/files/${nobody}`, 'lab.enter'),
  door('get', `/lab/files/${nobody}/original`, 'lab.enter', 'read'),
  door('get', '/earlier-readings', 'readings.import'),
  door('post', '/earlier-readings', 'readings.import'),
  door('get', `/earlier-readings/${nobody}`, 'readings.import'),
  door('patch', `/earlier-readings/${nobody}`, 'readings.import'),
  door('post', `/earlier-readings/${nobody}/store`, 'readings.import'),
  door('post', `/earlier-readings/${nobody}/take-back`, 'readings.import'),
  door('delete', `/earlier-readings/${nobody}`, 'readings.import'),
  door('get', `/earlier-readings/${nobody}/original`, 'readings.import'),
  door('get', `/zonings/${nobody}/plan-basis`, 'plans.margins', 'propose'),
  door('get', `/zonings/${nobody}/plans`, 'plans.margins', 'propose'),
  door('get', `/zonings/${nobody}/earlier-plans/${nobody}`, 'plans.margins', 'propose'),
  door('post', `/zonings/${nobody}/plans`, 'plans.draw'),
  door('get', '/plans', 'plans.margins', 'propose'),
  door('get', `/plans/${nobody}`, 'plans.margins', 'propose'),
  door('patch', `/plans/${nobody}`, 'plans.draw'),
  door('post', `/plans/${nobody}/lock`, 'plans.draw'),
  door('post', `/plans/${nobody}/redraw`, 'plans.draw'),
  door('post', `/zonings/${nobody}/divisions`, 'plans.margins', 'propose'),
  door('post', '/plans/day', 'plans.margins', 'propose'),
  door('get', `/plans/${nobody}/walk`, 'plans.margins', 'propose'),
  door('get', `/plans/${nobody}/standing`, 'plans.margins', 'propose'),
  door('get', `/plans/${nobody}/export`, 'plans.margins', 'propose'),
  door('post', `/plans/${nobody}/rounds`, 'rounds.assign'),
  door('post', '/plans/day/rounds', 'rounds.assign'),
  door('get', '/rounds/day-sheet', 'sheets.print', 'own'),
  door('get', '/rounds', 'readings.record', 'own'),
  door('get', `/rounds/${nobody}`, 'readings.record', 'own'),
  door('patch', `/rounds/${nobody}`, 'readings.record', 'own'),
  door('post', `/rounds/${nobody}/acknowledge`, 'notices.acknowledge'),
  door('get', `/rounds/${nobody}/sheet`, 'sheets.print', 'own'),
  door('post', `/rounds/${nobody}/labels`, 'sheets.print', 'own'),
  door('post', '/labels', 'sheets.print', 'own'),
  door('post', `/blocks/${nobody}/zonings`, 'zoning.run', 'propose'),
  door('get', `/blocks/${nobody}/zonings`, 'estate.see', 'read'),
  door('get', '/zonings', 'estate.see', 'read'),
  door('get', '/zones', 'estate.see', 'read'),
  door('get', `/zonings/${nobody}`, 'estate.see', 'read'),
  door('get', `/zonings/${nobody}/labels`, 'estate.see', 'read'),
  door('get', `/zonings/${nobody}/doubt`, 'estate.see', 'read'),
  door('get', `/zonings/${nobody}/memberships`, 'estate.see', 'read'),
  door('get', `/zonings/${nobody}/seasons`, 'estate.see', 'read'),
  door('post', `/zonings/${nobody}/presence`, 'zones.edit', 'propose'),
  door('patch', `/zonings/${nobody}`, 'zones.edit', 'propose'),
  door('get', `/zonings/${nobody}/edits`, 'estate.see', 'read'),
  door('post', `/zonings/${nobody}/edits`, 'zones.edit', 'propose'),
  door('post', `/zonings/${nobody}/undo`, 'zones.edit', 'propose'),
  door('post', `/zonings/${nobody}/redo`, 'zones.edit', 'propose'),
  door('get', `/zonings/${nobody}/effects`, 'zones.edit', 'propose'),
  door('get', `/zonings/${nobody}/compare?with=${nobody}`, 'estate.see', 'read'),
  door('get', `/zonings/${nobody}/export?format=geojson`, 'exports.make'),
  door('get', `/zonings/${nobody}/report`, 'exports.make'),
  door('post', `/zonings/${nobody}/publish`, 'zones.publish'),
  door('post', `/zonings/${nobody}/restore`, 'zones.restore', 'propose'),
  door('get', `/zonings/${nobody}/results`, 'results.see', 'read'),
  door('get', `/blocks/${nobody}/ripening`, 'results.see', 'read'),
  door('get', '/notices', 'notices.acknowledge'),
  door('get', '/notice-people', 'notices.send'),
  door('post', `/lots/${nobody}/notices`, 'notices.send'),
  door('post', `/notices/${nobody}/read`, 'notices.acknowledge'),
  door('get', '/tickets', 'lots.see', 'read'),
  door('post', '/tickets', 'tickets.enter'),
  door('get', '/review', 'review.see', 'read'),
  door('get', '/lots', 'lots.see', 'read'),
  door('post', '/lots', 'lots.build', 'propose'),
  door('patch', `/lots/${nobody}`, 'lots.build', 'propose'),
  door('put', `/lots/${nobody}/parts`, 'lots.build', 'propose'),
  door('post', `/lots/${nobody}/confirm`, 'lots.confirm', 'propose'),
  door('post', `/lots/${nobody}/reopen`, 'lots.confirm'),
  door('delete', `/lots/${nobody}`, 'lots.build'),
  door('post', '/scenarios', 'lots.build', 'propose'),
  door('get', '/tanks', 'lots.see', 'read'),
  door('post', '/tanks', 'lots.build'),
  door('patch', `/tanks/${nobody}`, 'lots.build'),
  door('delete', `/tanks/${nobody}`, 'lots.build'),
];

let app: TestApp;
let estateId: string;
const agents = new Map<Role, Agent>();

let filesFolder = '';
beforeAll(async () => {
  app = await startTestApp();
  filesFolder = mkdtempSync(join(tmpdir(), 'patchrow-doors-'));
  await openFileStore(filesFolder);
  ({ estateId } = await app.addEstate());
  for (const role of roles) agents.set(role, await app.as((await app.addPerson(estateId, role)).email));
});
afterAll(async () => {
  await app.close();
  rmSync(filesFolder, { recursive: true, force: true });
});

describe.each(doors)('$method $path asks for $action ($atLeast)', ({ method, path, action, atLeast }) => {
  it.each(roles)('%s', async (role) => {
    const agent = agents.get(role)!;
    const answer = method === 'get' ? await agent.get(`/api/estates/${estateId}${path}`) : await agent[method](`/api/estates/${estateId}${path}`, {});
    if (may([role], action, atLeast)) expect([401, 403, 500]).not.toContain(answer.status);
    else expect(answer.status).toBe(403);
  });
});

describe('doors of another estate', () => {
  let other = '';
  beforeAll(async () => {
    other = (await app.addEstate()).estateId;
  });

  it.each(doors)('$method $path is not found', async ({ method, path }) => {
    const agent = agents.get('owner')!;
    const url = `/api/estates/${other}${path}`;
    expect((method === 'get' ? await agent.get(url) : await agent[method](url, {})).status).toBe(404);
  });
});

describe('things of another estate', () => {
  const named = doors.filter(({ path }) => path.includes(nobody));
  let strange: Map<string, string>;
  beforeAll(async () => {
    const other = await app.addEstate();
    strange = await layOneOfEach(app.knex, other.estateId, other.ownerId);
  });

  it.each(named)('$method $path answers for them as for an id that does not exist', async ({ method, path }) => {
    const agent = agents.get('owner')!;
    const ask = (address: string) => (method === 'get' ? agent.get(`/api/estates/${estateId}${address}`) : agent[method](`/api/estates/${estateId}${address}`, {}));
    const table = tableOf[parameterOf(method, path)]!;
    const [theirs, none] = [await ask(path.replace(nobody, strange.get(table)!)), await ask(path)];
    expect({ status: theirs.status, body: theirs.body as unknown }).toEqual({ status: none.status, body: none.body as unknown });
    expect(theirs.status).not.toBe(500);
  });
});

describe('the list of doors', () => {
  it('has a row for every route of the estate, and no row without a route', () => {
    const served = estateRoutes();
    expect(served.filter((route) => !doors.some((one) => opens(one, route))).map(({ method, path }) => `${method} ${path}`)).toEqual([]);
    expect(doors.filter((one) => !served.some((route) => opens(one, route))).map(({ method, path }) => `${method} ${path}`)).toEqual([]);
  });

  it('names for every parameter the table that holds the thing', () => {
    const parameters = estateRoutes().flatMap(({ path }) => [...path.matchAll(/:(\w+)/g)].map((match) => match[1]!));
    expect([...new Set(parameters)].filter((name) => !(name in tableOf) && !notIds.has(name))).toEqual([]);
  });

  it.each(doors.filter(({ method }) => method !== 'get'))('$method $path refuses a write that lacks the token of the session', async ({ method, path }) => {
    const answer = await agents.get('owner')!.write(method as 'post', `/api/estates/${estateId}${path}`).set('x-csrf-token', 'made up').send({});
    expect(answer.status).toBe(403);
    expect(answer.body.detail).toMatch(/too old to write/);
  });
});

const estateRoutes = () => routesOf(app.server).filter(({ belowEstate }) => belowEstate);

function opens(one: Door, route: { method: string; path: string }): boolean {
  const pattern = new RegExp(`^${route.path.replace(/^\/$/, '').replace(/:\w+/g, '[^/]+')}$`);
  return (one.method === route.method || route.method === 'all') && pattern.test(one.path.split('?')[0]!);
}

/** Name of the first parameter in the address of a door. */
function parameterOf(method: string, path: string): string {
  const route = estateRoutes().find((each) => opens({ method, path } as Door, each) && each.path.includes(':'))!;
  return /:(\w+)/.exec(route.path)![1]!;
}
