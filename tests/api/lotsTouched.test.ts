import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { encodeCells } from '../../shared/analysis/cellBytes.ts';
import { cellCentre } from '../../shared/analysis/grid.ts';
import type { PublishEffects } from '../../shared/contracts/zonings.ts';
import { gridOf, zonesOfVines } from '../../server/ground/blockVines.ts';
import { Lot } from '../../server/models/Lot.ts';
import { LotPart } from '../../server/models/LotPart.ts';
import { LotRowRun, vineRange } from '../../server/models/LotRowRun.ts';
import { Scenario } from '../../server/models/Scenario.ts';
import { Season } from '../../server/models/Season.ts';
import { Zoning } from '../../server/models/Zoning.ts';
import { makeZonedBlock, type ZonedBlock } from './support/makeZonedBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let winemaker: Agent;
let block: ZonedBlock;
let estateId: string;
let base: string;
let draftId: string;
let moved: number;

/** A block whose rows run across its zones, its left half in a lot; a draft lets only the left quarter be zone 1. */
beforeAll(async () => {
  app = await startTestApp();
  const estate = await app.addEstate('Lots touched');
  ({ estateId } = estate);
  block = await makeZonedBlock({ estateId, personId: estate.ownerId }, { name: 'Low Shelf', rowBearingDeg: 90 });
  winemaker = await app.as((await app.addPerson(estateId, 'winemaker')).email);
  base = `/api/estates/${estateId}`;
  const { id } = (await winemaker.post(`${base}/lots`, { name: 'Left half', pickOn: '2026-09-25' })).body as { id: string };
  expect((await winemaker.write('put', `${base}/lots/${id}/parts`).set('if-match', '"1"').send({ parts: [{ zoneId: block.zoneIds[0]! }] })).status).toBe(204);

  const live = await Zoning.query().findById(block.zoningId).throwIfNotFound();
  const grid = gridOf(block.ground);
  const eastings = [...grid.inside.keys()].filter((cell) => grid.inside[cell]).map((cell) => cellCentre(grid, cell)[0]);
  const quarter = Math.min(...eastings) + (Math.max(...eastings) - Math.min(...eastings)) / 4;
  const labels = Buffer.from(encodeCells(Uint8Array.from(grid.inside, (inside, cell) => (inside ? (cellCentre(grid, cell)[0] < quarter ? 1 : 2) : 0))));
  const { id: _id, createdAt: _at, ...same } = live;
  draftId = (await Zoning.query().insert({ ...same, number: 2, state: 'draft', labels } as never)).id;
  const after = zonesOfVines(block.ground, { labels, gridKey: live.gridKey });
  moved = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === 1 && after[vine] === 2).length;
});
afterAll(() => app.close());

const touched = async () => ((await winemaker.get(`${base}/zonings/${draftId}/effects`)).body as PublishEffects).lots;
const weigh = (over: object = {}) => winemaker.post(`${base}/tickets`, { lotId: '', ticketNo: '1', gross: 9000, tare: 3000, weighedAt: '2026-09-26T09:00:00Z', corrects: null, note: '', split: [], ...over });

describe('what publishing zones does to lots', () => {
  it('names a lot with the vines that will count for another zone', async () => {
    expect(moved).toBeGreaterThan(50);
    expect(await touched()).toMatchObject([{ name: 'Left half', isPicked: false, vinesMoved: moved }]);
  });

  it('leaves out lots of other seasons, which are judged by their own season’s zones', async () => {
    const earlier = await Season.query().insertAndFetch({ estateId, name: 'Long ago', startsOn: '2001-03-01', endsOn: '2002-02-28' });
    const scenario = await Scenario.query().insertAndFetch({ estateId, seasonId: earlier.id, name: 'Then', isLive: true } as never);
    const old = await Lot.query().insertAndFetch({ estateId, seasonId: earlier.id, scenarioId: scenario.id, name: 'Long gone' } as never);
    const part = await LotPart.query().insertAndFetch({ estateId, lotId: old.id, blockId: block.blockId, zoneNumber: 1, zoneName: '' } as never);
    await LotRowRun.query().insert(block.ground.stored.map((row) => ({ estateId, scenarioId: scenario.id, lotPartId: part.id, rowId: row.id, vines: vineRange(1, 20) as unknown as string })));
    expect((await touched()).map(({ name }) => name)).toEqual(['Left half']);
  });

  it('says of a picked lot that it is, since its fruit can no longer be parted', async () => {
    const lotId = (await touched())[0]!.id;
    const sent = await weigh({ lotId });
    expect(sent.status, sent.text).toBe(201);
    expect(await touched()).toMatchObject([{ name: 'Left half', isPicked: true, vinesMoved: moved }]);
    const taken = await weigh({ lotId, ticketNo: '1', gross: 3000, corrects: sent.body.id, note: 'Another estate’s' });
    expect(taken.status, taken.text).toBe(201);
    expect(await touched()).toMatchObject([{ isPicked: false }]);
  });
});
