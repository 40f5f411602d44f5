import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { encodeCells } from '../../shared/analysis/cellBytes.ts';
import { cellCentre } from '../../shared/analysis/grid.ts';
import type { LotsBoard, LotView } from '../../shared/contracts/lots.ts';
import { gridOf } from '../../server/ground/blockVines.ts';
import { Zone } from '../../server/models/Zone.ts';
import { Zoning } from '../../server/models/Zoning.ts';
import { makeZonedBlock, type ZonedBlock } from './support/makeZonedBlock.ts';
import { startTestApp, type Agent, type TestApp } from './support/testApp.ts';

let app: TestApp;
let winemaker: Agent;
let block: ZonedBlock;
let base: string;

/** A block whose rows run across its zones; the left half is in lot A. Then other zones are put in force: the left quarter, and the rest. */
beforeAll(async () => {
  app = await startTestApp();
  const { estateId, ownerId } = await app.addEstate('Lots rezoned');
  block = await makeZonedBlock({ estateId, personId: ownerId }, { name: 'Cross Rows', rowBearingDeg: 90 });
  winemaker = await app.as((await app.addPerson(estateId, 'winemaker')).email);
  base = `/api/estates/${estateId}`;
  for (const name of ['A', 'B']) await winemaker.post(`${base}/lots`, { name });
  await put('A', [{ zoneId: block.zoneIds[0]! }]);

  const first = await Zoning.query().findById(block.zoningId).throwIfNotFound();
  const grid = gridOf(block.ground);
  const eastings = [...grid.inside.keys()].filter((cell) => grid.inside[cell]).map((cell) => cellCentre(grid, cell)[0]);
  const quarter = Math.min(...eastings) + (Math.max(...eastings) - Math.min(...eastings)) / 4;
  const labels = Uint8Array.from(grid.inside, (inside, cell) => (inside ? (cellCentre(grid, cell)[0] < quarter ? 1 : 2) : 0));
  await first.$query().patch({ state: 'retired' });
  const { id: _id, createdAt: _at, ...same } = first;
  const second = await Zoning.query().insert({ ...same, number: 2, state: 'live', labels: Buffer.from(encodeCells(labels)) } as never);
  const outline = await Zone.query().where({ zoningId: first.id }).orderBy('number').select('geometry', 'areaM2');
  await Zone.query().insert(outline.map(({ geometry, areaM2 }, at) => ({ estateId, zoningId: second.id, number: at + 1, name: `New ${at + 1}`, geometry, areaM2, vineCount: 0 })));
});
afterAll(() => app.close());

const board = async () => (await winemaker.get(`${base}/lots`)).body as LotsBoard;
const lot = async (name: string): Promise<LotView> => (await board()).lots.find((one) => one.name === name)!;
const put = async (name: string, parts: readonly object[]) => winemaker.write('put', `${base}/lots/${(await lot(name)).id}/parts`).set('if-match', `"${(await lot(name)).version}"`).send({ parts });
const vinesOf = async (name: string) => (await lot(name)).lines.map(({ number, vines }) => [number, vines]);

describe('a lot whose zones were published anew', () => {
  it('keeps its vines, which count for the zones of today', async () => {
    const before = [...block.zoneOf].filter((zone) => zone === 1).length;
    const { lines } = await lot('A');
    expect(lines.map(({ number }) => number)).toEqual([1, 2]);
    expect(lines.reduce((sum, { vines }) => sum + vines, 0)).toBe(before);
  });

  it('keeps them too when its rows are sent back as they are shown', async () => {
    const before = await vinesOf('A');
    const { lines } = await lot('A');
    expect((await put('A', lines.map(({ zoneId, rowIds }) => ({ zoneId, rowIds })))).status).toBe(204);
    expect(await vinesOf('A')).toEqual(before);
  });

  it('gives what it holds of one of today’s zones to another lot, and no vine more', async () => {
    const [one, two] = (await vinesOf('A')) as [[number, number], [number, number]];
    const [a, b] = [await lot('A'), await lot('B')];
    const move = (zoneId: string | null) => winemaker.post(`${base}/lot-moves`, { zoneId, fromLotId: a.id, fromVersion: a.version, toLotId: b.id, toVersion: b.version });
    const gone = await move(block.zoneIds[0]!);
    expect([gone.status, gone.body.code]).toEqual([422, 'zoneNotLive']);
    expect((await move(a.lines[1]!.zoneId)).status).toBe(204);
    expect(await vinesOf('A')).toEqual([one]);
    expect(await vinesOf('B')).toEqual([two]);
    const zone = (await board()).zones.find(({ number }) => number === 2)!;
    expect(zone.inLots.map(({ lotName }) => lotName)).toEqual(['B']);
    expect(zone.freeShare + zone.inLots[0]!.share).toBeCloseTo(1, 12);
  });

  it('takes the whole of a zone when the whole is asked for', async () => {
    const zone = (await board()).zones.find(({ number }) => number === 2)!;
    expect((await put('B', [{ zoneId: zone.zoneId }])).status).toBe(204);
    expect(await vinesOf('B')).toEqual([[2, zone.vines]]);
  });
});
