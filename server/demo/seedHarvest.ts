import type { Access } from '../access/access.ts';
import { newRestriction } from '../../shared/contracts/restrictions.ts';
import { Block } from '../models/Block.ts';
import { Lot } from '../models/Lot.ts';
import { Scenario } from '../models/Scenario.ts';
import { enterCellarResult } from '../services/lots/cellar.ts';
import { setCapacity } from '../services/lots/capacities.ts';
import { confirmLot, createLot } from '../services/lots/changeLots.ts';
import { readNotice, sendNotice } from '../services/lots/notices.ts';
import { enterTicket } from '../services/lots/tickets.ts';
import { setRestriction } from '../services/restrictions.ts';
import { importWeather } from '../services/weather/weather.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { LotHistory } from '../models/LotHistory.ts';
import { WeatherDayRecord } from '../models/WeatherDayRecord.ts';
import { WeatherHistory } from '../models/WeatherHistory.ts';
import type { DemoDays } from './demoDays.ts';
import type { DemoPlace } from './demoPlace.ts';
import type { DemoEstate } from './seedEstate.ts';

/** The first lot of the year is in: its notice was read, its loads were weighed, the cellar has measured it. */
export async function seedHarvest(made: DemoEstate, options: { days: DemoDays; place: DemoPlace; now: Date }): Promise<void> {
  const { days, place, now } = options;
  const access: Access = { estateId: made.estateId, personId: made.personOf('winemaker'), roles: ['winemaker'] };
  await importWeather({ ...access, personId: made.personOf('agronomist'), roles: ['agronomist'] }, { text: stationTable(days, place), dateOrder: null, decimalMark: null, units: null, apply: true }, now);
  // A station's day is known on the next one, so that an earlier day can be shown with its weather.
  await WeatherDayRecord.query().where({ estateId: made.estateId }).patch({ enteredAt: WeatherDayRecord.raw('(day + 1)::timestamptz') as never });
  await WeatherHistory.query().where({ estateId: made.estateId }).delete();
  await setCapacity(access, { day: null, pickT: 42, pressT: 12, note: '' });
  const lot = await Lot.query().findOne({ estateId: made.estateId, seasonId: made.seasons[0]!.id, name: 'First white' });
  if (!lot) return;
  await confirmLot(access, lot.id, lot.version, days.at(-6, 15));
  const { id } = await sendNotice(access, lot.id, { fromTime: '06:30', note: '', people: [made.personOf('manager'), made.personOf('crew')] }, { publicUrl: 'http://localhost', now: days.at(-5, 9) });
  await readNotice({ estateId: made.estateId, personId: made.personOf('manager'), roles: ['manager'] }, id, days.at(-5, 10));
  const manager: Access = { estateId: made.estateId, personId: made.personOf('manager'), roles: ['manager'] };
  const load = (ticketNo: string, gross: number, hour: number) => enterTicket(manager, { lotId: lot.id, ticketNo, gross, tare: 3120, unit: 'kg', weighedAt: days.at(-3, hour).toISOString(), split: [], corrects: null, note: '' }, days.at(-3, hour + 1));
  await load('M-0411', 7340, 9);
  await load('M-0412', 7015, 11);
  await enterCellarResult(access, lot.id, { mustL: 5030, wineL: null, tankBrix: 23.5, leftOutKg: 140, note: '' }, days.at(-2, 10));
  await earlierLots(made, days);
  await copperOn(manager, days);
  // The board of an earlier day is part of the demo: the lots were made some time ago, the white was picked since.
  await LotHistory.query().where({ estateId: made.estateId, rowId: lot.id }).where('at', '>', days.at(-1, 0)).patch({ at: days.at(-3, 18) });
}

/** Lots of the seasons before, as the cellar kept them: enough to learn litres a tonne from. */
async function earlierLots(made: DemoEstate, days: DemoDays): Promise<void> {
  const winemaker: Access = { estateId: made.estateId, personId: made.personOf('winemaker'), roles: ['winemaker'] };
  const manager: Access = { estateId: made.estateId, personId: made.personOf('manager'), roles: ['manager'] };
  for (const { yearsAgo, name, wineType, offset, kg, mustL, wineL } of earlier) {
    const day = offset - 365 * yearsAgo;
    const scenario = await Scenario.query().findOne({ estateId: made.estateId, seasonId: made.seasons[yearsAgo]!.id, isLive: true }).throwIfNotFound();
    const { id } = await createLot(winemaker, { name, wineType, scenarioId: scenario.id, pickOn: days.day(day), tankId: null, crew: '', alcoholMethod: null }, days.day(day));
    await enterTicket(manager, { lotId: id, ticketNo: `${days.day(day).slice(2, 4)}-${kg}`, gross: kg + 3120, tare: 3120, unit: 'kg', weighedAt: days.at(day, 10).toISOString(), split: [], corrects: null, note: '' }, days.at(day, 11));
    await enterCellarResult(winemaker, id, { mustL, wineL, tankBrix: null, leftOutKg: null, note: '' }, days.at(day + 40, 10));
  }
}

const earlier = [
  { yearsAgo: 2, name: 'Marl red', wineType: 'red', offset: 12, kg: 18_640, mustL: 16_200, wineL: 12_900 },
  { yearsAgo: 2, name: 'Hollow red', wineType: 'red', offset: 17, kg: 26_480, mustL: 23_900, wineL: 18_700 },
  { yearsAgo: 1, name: 'Marl red', wineType: 'red', offset: 10, kg: 20_120, mustL: 17_100, wineL: 13_500 },
  { yearsAgo: 1, name: 'Hollow red', wineType: 'red', offset: 16, kg: 28_900, mustL: 25_300, wineL: 20_300 },
] as const;

/** Entry is open again, but the rosé may not be picked as early as it is planned: the pick board shows who may decide. */
async function copperOn(manager: Access, days: DemoDays): Promise<void> {
  const block = await Block.query().findOne({ estateId: manager.estateId, name: "Tinker's Acre" }).throwIfNotFound();
  await setRestriction(manager, newRestriction.parse({ blockId: block.id, startsAt: days.at(-12, 5).toISOString(), endsAt: days.at(-10, 5).toISOString(), product: 'Copper hydroxide', labelInterval: '21 days before harvest', noPickBefore: days.day(11), note: '' }));
}

const seasonDays = 250;
const hottest = -40;
/** From here on it stayed dry, but for one wet spell. */
const dryFrom = -26;

/** A made-up station: warmest some weeks before the pick, with showers and one wet spell just before a visit. */
function stationTable(days: DemoDays, { weather }: DemoPlace): string {
  const random = seededRandom(911);
  const lines = Array.from({ length: seasonDays }, (_, at) => {
    const offset = at - seasonDays;
    const season = Math.cos(((offset - hottest) / 365) * 2 * Math.PI);
    const max = weather.meanMaxC + weather.swingC * season + 2 * randomNormal(random);
    const min = max - weather.downC - 2 * random();
    const wet = offset === -10 ? 14.2 : offset === -9 ? 6.4 : random() < 0.12 && offset < dryFrom ? 1 + 6 * random() : 0;
    return `${days.day(offset)},${max.toFixed(1)},${min.toFixed(1)},${wet.toFixed(1)}`;
  });
  return ['date,max °C,min °C,rain mm', ...lines].join('\n');
}
