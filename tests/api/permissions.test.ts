import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { may, type Permission, type Reach } from '../../shared/catalog/permissions.ts';
import { roles, type Role } from '../../shared/catalog/roles.ts';
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
  door('patch', '', 'estate.settings'),
  door('get', '/people', 'people.see', 'read'),
  door('put', `/people/${nobody}/roles`, 'people.manage', 'propose'),
  door('get', '/invitations', 'people.see', 'read'),
  door('post', '/invitations', 'people.manage', 'propose'),
  door('delete', `/invitations/${nobody}`, 'people.manage', 'propose'),
  door('get', '/audit', 'audit.see', 'read'),
  door('get', '/mail', 'mail.see'),
  door('get', `/jobs/${nobody}`, 'estate.see', 'read'),
  door('delete', `/jobs/${nobody}`, 'zoning.run', 'propose'),
  door('get', '/measures', 'estate.see', 'read'),
  door('post', '/measures', 'plans.margins'),
  door('patch', `/measures/${nobody}`, 'plans.margins'),
  door('get', '/restrictions', 'restrictions.see', 'read'),
  door('post', '/restrictions', 'restrictions.set'),
  door('post', `/restrictions/${nobody}/lift`, 'restrictions.lift'),
  door('get', '/readings', 'readings.record', 'own'),
  door('post', '/readings', 'readings.record', 'own'),
  door('put', `/readings/${nobody}/exclusion`, 'outliers.exclude'),
  door('get', '/conflicts', 'readings.correct'),
  door('post', `/conflicts/${nobody}/settle`, 'readings.correct'),
  door('get', `/zonings/${nobody}/plan-basis`, 'plans.margins', 'propose'),
  door('get', `/zonings/${nobody}/plans`, 'plans.margins', 'propose'),
  door('post', `/zonings/${nobody}/plans`, 'plans.draw'),
  door('get', '/plans', 'plans.margins', 'propose'),
  door('get', `/plans/${nobody}`, 'plans.margins', 'propose'),
  door('patch', `/plans/${nobody}`, 'plans.draw'),
  door('post', `/plans/${nobody}/lock`, 'plans.draw'),
  door('post', `/plans/${nobody}/redraw`, 'plans.draw'),
  door('get', `/plans/${nobody}/export`, 'plans.margins', 'propose'),
  door('post', `/plans/${nobody}/rounds`, 'rounds.assign'),
  door('get', '/rounds', 'readings.record', 'own'),
  door('get', `/rounds/${nobody}`, 'readings.record', 'own'),
  door('patch', `/rounds/${nobody}`, 'readings.record', 'own'),
  door('post', `/rounds/${nobody}/acknowledge`, 'notices.acknowledge'),
  door('get', `/rounds/${nobody}/sheet`, 'sheets.print', 'own'),
  door('post', `/blocks/${nobody}/zonings`, 'zoning.run', 'propose'),
  door('get', `/blocks/${nobody}/zonings`, 'estate.see', 'read'),
  door('get', '/zonings', 'estate.see', 'read'),
  door('get', '/zones', 'estate.see', 'read'),
  door('get', `/zonings/${nobody}`, 'estate.see', 'read'),
  door('get', `/zonings/${nobody}/labels`, 'estate.see', 'read'),
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

beforeAll(async () => {
  app = await startTestApp();
  ({ estateId } = await app.addEstate());
  for (const role of roles) agents.set(role, await app.as((await app.addPerson(estateId, role)).email));
});
afterAll(() => app.close());

describe.each(doors)('$method $path asks for $action ($atLeast)', ({ method, path, action, atLeast }) => {
  it.each(roles)('%s', async (role) => {
    const agent = agents.get(role)!;
    const answer = method === 'get' ? await agent.get(`/api/estates/${estateId}${path}`) : await agent[method](`/api/estates/${estateId}${path}`, {});
    if (may([role], action, atLeast)) expect([401, 403, 500]).not.toContain(answer.status);
    else expect(answer.status).toBe(403);
  });
});

describe('doors of another estate', () => {
  it.each(doors)('$method $path is not found', async ({ method, path }) => {
    const other = await app.addEstate();
    const agent = agents.get('owner')!;
    const url = `/api/estates/${other.estateId}${path}`;
    expect((method === 'get' ? await agent.get(url) : await agent[method](url, {})).status).toBe(404);
  });
});
