import type { Access } from '../access/access.ts';
import { zonesInForce } from '../ground/zonesInForce.ts';
import { Zone } from '../models/Zone.ts';
import { Tank } from '../models/Tank.ts';
import { Lot } from '../models/Lot.ts';
import { LotHistory } from '../models/LotHistory.ts';
import { changeLot, createLot, setLotParts } from '../services/lots/changeLots.ts';
import type { DemoDays } from './demoDays.ts';
import type { DemoEstate } from './seedEstate.ts';

interface DemoLot {
  name: string;
  wineType: 'red' | 'white' | 'rose';
  /** Days from today. */
  pick: number;
  tank: string;
  /** Block name and zone number. */
  parts: readonly (readonly [string, number])[];
}

const lots: readonly DemoLot[] = [
  { name: 'First white', wineType: 'white', pick: -3, tank: 'W2', parts: [['Millrace', 2]] },
  { name: 'Marl red', wineType: 'red', pick: 12, tank: 'T1', parts: [['Heron Bank', 1], ['Long Furrow', 1]] },
  { name: 'Hollow red', wineType: 'red', pick: 17, tank: 'T2', parts: [['Heron Bank', 3], ['Long Furrow', 3]] },
  { name: 'Early rosé', wineType: 'rose', pick: 9, tank: 'T4', parts: [["Tinker's Acre", 1]] },
  { name: 'Millrace white', wineType: 'white', pick: 10, tank: 'W3', parts: [['Millrace', 1]] },
];

/** Its day was moved forward. */
const moved = 'Marl red';

/** Lots in the making: some zones are spoken for, others are still free. */
export async function seedLots(made: DemoEstate, days: DemoDays): Promise<void> {
  const access: Access = { estateId: made.estateId, personId: made.personOf('winemaker'), roles: ['winemaker'] };
  const zones = (await Zone.query().where('zones.estateId', made.estateId).join('zonings', 'zonings.id', 'zones.zoningId').join('blocks', 'blocks.id', 'zonings.blockId').whereIn('zones.zoningId', zonesInForce(made.estateId).select('zonings.id')).select('zones.id', 'zones.number', 'blocks.name as blockName')) as unknown as { id: string; number: number; blockName: string }[];
  const tanks = await Tank.query().where({ estateId: made.estateId });
  for (const { name, wineType, pick, tank, parts } of lots) {
    const wanted = parts.flatMap(([block, number]) => zones.filter((zone) => zone.blockName === block && zone.number === number).map((zone) => ({ zoneId: zone.id, rowIds: null })));
    if (wanted.length === 0) continue;
    const { id } = await createLot(access, { name, wineType, scenarioId: null, pickOn: null, tankId: null, crew: '', alcoholMethod: null }, days.day(0));
    const version = async () => (await Lot.query().findById(id).throwIfNotFound()).version;
    await setLotParts(access, id, { parts: wanted }, await version());
    await changeLot(access, id, { pickOn: days.day(name === moved ? pick + 3 : pick), tankId: tanks.find((candidate) => candidate.name === tank)?.id ?? null }, await version());
  }
  // All this was done ten days ago; one date was changed since, for the board of an earlier day to differ.
  await LotHistory.query().where({ estateId: made.estateId }).patch({ at: days.at(-10, 9) });
  const lot = await Lot.query().findOne({ estateId: made.estateId, name: moved });
  if (lot) await changeLot(access, lot.id, { pickOn: days.day(lots.find(({ name }) => name === moved)!.pick) }, lot.version);
}
