import { randomIndex, randomNormal, seededRandom, type Random } from '../../shared/analysis/random.ts';
import { labelCode } from '../../shared/field/labelCode.ts';
import type { Access } from '../access/access.ts';
import { isBearing, zonesOfVines } from '../ground/blockVines.ts';
import { zonesInForce } from '../ground/zonesInForce.ts';
import { closeBags } from '../services/bags/closeBags.ts';
import { receiveBags, reportMissing } from '../services/bags/receiveBags.ts';
import { recordResults } from '../services/lab/recordResults.ts';
import { setResultState } from '../services/lab/settleResults.ts';
import type { DemoDays } from './demoDays.ts';

import type { LaidBlock } from './seedBlocks.ts';
import type { DemoEstate } from './seedEstate.ts';
import { uuidFrom } from './uuidFrom.ts';

const bagsPerZone = 4;
const vinesPerBag = 5;
const firstLabel = 120_500;
const labelStep = 7_919;

/** Bags of yesterday's visit: most are on the bench, some of those measured, one is missing and one has no origin yet. */
export async function seedLab(made: DemoEstate, laid: readonly LaidBlock[], options: { days: DemoDays; now: Date }): Promise<void> {
  const { estateId } = made;
  const manager: Access = { estateId, personId: made.personOf('manager'), roles: ['manager'] };
  const lab: Access = { estateId, personId: made.personOf('lab'), roles: ['lab'] };
  const random = seededRandom(4711);
  const bags = await closedBags(estateId, laid.find(({ demo }) => demo.key === 'heron')!, { days: options.days, random });
  await closeBags(manager, { bags: bags.map(({ zone: _, ...bag }) => bag) }, options.now);
  const [here, underway] = [bags.slice(0, -4), bags.slice(-4)];
  await receiveBags(lab, [...here.map(({ code }) => code), labelCode(firstLabel + 99 * labelStep)], options.now);
  await reportMissing(lab, { bagIds: [underway[0]!.id], ifExpected: true }, options.now);
  const measured = here.slice(0, 6);
  const results = measured.flatMap(({ code, zone }) => figuresOf(zone, random).map((figure) => ({ id: uuidFrom(random), code, ...figure })));
  await recordResults(lab, { results }, options.now);
  await setResultState(lab, { resultIds: results.slice(0, 9).map(({ id }) => id), state: 'checked' }, options.now);
}

interface DemoBag {
  id: string;
  code: string;
  zone: number;
  [fact: string]: unknown;
}

async function closedBags(estateId: string, block: LaidBlock, { days, random }: { days: DemoDays; random: Random }): Promise<DemoBag[]> {
  const { ground } = block;
  const zoning = await zonesInForce(estateId).findOne({ blockId: ground.block.id }).throwIfNotFound();
  const zoneOf = zonesOfVines(ground, zoning);
  const zones = [...new Set(zoneOf)].filter((zone) => zone > 0).sort((a, b) => a - b);
  return zones.flatMap((zone) => Array.from({ length: bagsPerZone }, (_, at) => {
    const vines: { rowId: string; ordinal: number }[] = [];
    while (vines.length < vinesPerBag) {
      const vine = randomIndex(random, ground.vines.count);
      if (zoneOf[vine] === zone && isBearing(ground.states[vine]!)) vines.push({ rowId: ground.stored[ground.vines.row[vine]!]!.id, ordinal: ground.vines.ordinal[vine]! });
    }
    const place = (zone - 1) * bagsPerZone + at;
    return { id: uuidFrom(random), code: labelCode(firstLabel + place * labelStep), zone, blockId: ground.block.id, vines, berries: 100, sunSide: 50, shadeSide: 50, wet: place === 2, rotPercent: place % 5 === 0 ? 2 : 0, closedAt: new Date(days.at(-1, 6).getTime() + place * 420_000).toISOString() };
  }));
}

function figuresOf(zone: number, random: Random): { measureCode: string; typed: string; instrument: string }[] {
  const drawn = (mean: number, sd: number, decimals: number) => (mean + sd * randomNormal(random)).toFixed(decimals);
  return [
    { measureCode: 'brix', typed: drawn(24.4 - 0.7 * zone, 0.4, 1), instrument: 'Refractometer 2' },
    { measureCode: 'ph', typed: drawn(3.42 - 0.03 * zone, 0.04, 2), instrument: 'pH meter' },
    { measureCode: 'ta', typed: drawn(6.2 + 0.3 * zone, 0.3, 1), instrument: 'Burette' },
  ];
}
