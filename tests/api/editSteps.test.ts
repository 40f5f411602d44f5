import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { seededRandom } from '../../shared/analysis/random.ts';
import type { ZoneOperation, ZoningView } from '../../shared/contracts/zonings.ts';
import { closeComputePool, openComputePool } from '../../server/workers/computePool.ts';
import { makePlateauBlock, workOnZoning, type PlateauBlock } from './support/makePlateauBlock.ts';
import { randomOperation } from './support/randomOperation.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

const editsMade = 55;
const kinds: readonly ZoneOperation['kind'][] = ['merge', 'split', 'splitAlongRow', 'giveRows', 'giveArea', 'rename', 'renumber', 'recolour', 'snap', 'clean'];

let app: TestApp;
let manager: Agent;
let plot: PlateauBlock;
let draft: string;
/** Where the draft stood after so many edits, read as a page that is loaded anew reads it. */
const states: string[] = [];

beforeAll(async () => {
  app = await startTestApp();
  openComputePool(1);
  const estate = await app.addEstate('Edit steps');
  plot = await makePlateauBlock({ estateId: estate.estateId, personId: estate.ownerId });
  manager = await app.as((await app.addPerson(estate.estateId, 'manager')).email);
  const base = `/api/estates/${estate.estateId}`;
  const agronomist = await app.as((await app.addPerson(estate.estateId, 'agronomist')).email);
  const asked = await agronomist.post(`${base}/blocks/${plot.blockId}/zonings`, { layers: [{ layerId: plot.layerId }], smallestPatchHa: 0.05 });
  expect(asked.status, asked.text).toBe(202);
  await workOnZoning(asked.body.jobId as string);
  draft = `${base}/zonings/${asked.body.zoningId as string}`;
  expect((await manager.patch(draft, { chosenZones: 3 })).status).toBe(200);
});
afterAll(async () => {
  await closeComputePool();
  await app.close();
});

const view = async () => (await manager.get(draft)).body as ZoningView;

/** Labels to the byte, and all that is said of the zones but the keys of their rows. */
async function stateNow(): Promise<string> {
  const labels = (await manager.get(`${draft}/labels`)).body as Buffer;
  return JSON.stringify([labels.toString('base64'), (await view()).zones.map(({ id: _id, ...zone }) => zone)]);
}
const step = async (which: 'undo' | 'redo') => manager.post(`${draft}/${which}`, { revision: (await view()).revision });

describe(`undo and redo of ${editsMade} edits`, () => {
  it('makes edits of every kind, and a refused one changes nothing', async () => {
    const random = seededRandom(20_261_203);
    const made = new Set<string>();
    states.push(await stateNow());
    while (states.length <= editsMade) {
      const operation = randomOperation(plot, random);
      const answer = await manager.post(`${draft}/edits`, { operation, reason: '', revision: (await view()).revision });
      const now = await stateNow();
      if (answer.status === 422) {
        expect(now).toBe(states.at(-1));
        continue;
      }
      expect(answer.status, answer.text).toBe(201);
      made.add(operation.kind);
      states.push(now);
    }
    expect([...made].sort()).toEqual([...kinds].sort());
    expect(new Set(states).size).toBeGreaterThan(editsMade / 2);
  }, 240_000);

  it('goes back through each of them to the byte, and no further', async () => {
    for (let at = editsMade - 1; at >= 0; at--) {
      expect((await step('undo')).status).toBe(200);
      expect(await stateNow() === states[at], `after ${at} edits`).toBe(true);
    }
    expect((await step('undo')).body.code).toBe('nothingToStep');
  }, 240_000);

  it('comes forward through each of them to the byte, and no further', async () => {
    for (let at = 1; at <= editsMade; at++) {
      expect((await step('redo')).status).toBe(200);
      expect(await stateNow() === states[at], `after ${at} edits`).toBe(true);
    }
    expect((await step('redo')).body.code).toBe('nothingToStep');
  }, 240_000);
});
