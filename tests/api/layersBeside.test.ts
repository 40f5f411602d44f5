import { afterAll, beforeAll, expect, it } from 'vitest';
import type { LayerBeside } from '../../shared/contracts/layers.ts';
import { BlockLayer } from '../../server/models/BlockLayer.ts';
import { Layer } from '../../server/models/Layer.ts';
import { closeComputePool, openComputePool } from '../../server/workers/computePool.ts';
import { makePlateauBlock, type PlateauBlock } from './support/makePlateauBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let agronomist: Agent;
let plot: PlateauBlock;
let soil: Layer;
let path: (layerId: string) => string;

beforeAll(async () => {
  app = await startTestApp();
  openComputePool(1);
  const { estateId, ownerId } = await app.addEstate('Beside');
  plot = await makePlateauBlock({ estateId, personId: ownerId });
  soil = await Layer.query().insert({ estateId, type: 'conductivity', name: 'Sonde d’avril', unit: 'mS/m', measuredOn: '2026-04-17', createdBy: ownerId });
  const { gridKey, cells, coverage, statistics, findings } = await BlockLayer.query().findOne({ layerId: plot.layerId }).throwIfNotFound();
  await BlockLayer.query().insert({ estateId, layerId: soil.id, blockId: plot.blockId, gridKey, cells, coverage, statistics, findings });
  agronomist = await app.as((await app.addPerson(estateId, 'agronomist')).email);
  path = (layerId) => `/api/estates/${estateId}/layers/${layerId}/beside?block=${plot.blockId}`;
});
afterAll(async () => {
  await closeComputePool();
  await app.close();
});

it('are as alike as their cells', async () => {
  const answer = await agronomist.get(path(plot.layerId));
  expect(answer.status, answer.text).toBe(200);
  const [other, ...more] = answer.body.items as LayerBeside[];
  expect(other).toMatchObject({ id: soil.id, name: 'Sonde d’avril', shift: null });
  expect(other!.correlation).toBeCloseTo(1, 6);
  expect(more).toEqual([]);
});

it('refuse by name the one whose cells are damaged, whichever is asked for', async () => {
  const here = await BlockLayer.query().findOne({ layerId: soil.id }).throwIfNotFound();
  await BlockLayer.query().findById(here.id).patch({ cells: here.cells.subarray(0, 40) });
  for (const asked of [plot.layerId, soil.id]) {
    const refused = await agronomist.get(path(asked));
    expect([refused.status, refused.body.code]).toEqual([422, 'layerCells']);
    expect(refused.body.detail).toBe('The stored values of layer "Sonde d’avril" cannot be read. Import its file again, or leave the layer out.');
  }
});
