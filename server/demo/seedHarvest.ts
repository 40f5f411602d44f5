import type { Access } from '../access/access.ts';
import { Lot } from '../models/Lot.ts';
import { enterCellarResult } from '../services/lots/cellar.ts';
import { setCapacity } from '../services/lots/capacities.ts';
import { confirmLot } from '../services/lots/changeLots.ts';
import { readNotice, sendNotice } from '../services/lots/notices.ts';
import { enterTicket } from '../services/lots/tickets.ts';
import { importWeather } from '../services/weather/weather.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import type { DemoDays } from './demoDays.ts';
import type { DemoEstate } from './seedEstate.ts';

/** The first lot of the year is in: its notice was read, its loads were weighed, the cellar has measured it. */
export async function seedHarvest(made: DemoEstate, options: { days: DemoDays; now: Date }): Promise<void> {
  const { days, now } = options;
  const access: Access = { estateId: made.estateId, personId: made.personOf('winemaker'), roles: ['winemaker'] };
  await importWeather({ ...access, personId: made.personOf('agronomist'), roles: ['agronomist'] }, { text: stationTable(days), dateOrder: null, decimalMark: null, units: null, apply: true }, now);
  await setCapacity(access, { day: null, pickT: 25, pressT: 14, note: '' });
  const lot = await Lot.query().findOne({ estateId: made.estateId, name: 'First white' });
  if (!lot) return;
  await confirmLot(access, lot.id, lot.version, days.at(-6, 15));
  const { id } = await sendNotice(access, lot.id, { fromTime: '06:30', note: '', people: [made.personOf('manager'), made.personOf('crew')] }, { publicUrl: 'http://localhost', now: days.at(-5, 9) });
  await readNotice({ estateId: made.estateId, personId: made.personOf('manager'), roles: ['manager'] }, id, days.at(-5, 10));
  const manager: Access = { estateId: made.estateId, personId: made.personOf('manager'), roles: ['manager'] };
  const load = (ticketNo: string, gross: number, hour: number) => enterTicket(manager, { lotId: lot.id, ticketNo, gross, tare: 3120, unit: 'kg', weighedAt: days.at(-3, hour).toISOString(), split: [], corrects: null, note: '' }, days.at(-3, hour + 1));
  await load('M-0411', 7340, 9);
  await load('M-0412', 7015, 11);
  await enterCellarResult(access, lot.id, { mustL: 5030, wineL: null, tankBrix: 23.5, leftOutKg: 140, note: '' }, days.at(-2, 10));
}

const seasonDays = 240;
const hottest = -75;

/** A made-up station: warmest some weeks before the pick, with showers and one wet spell just before a visit. */
function stationTable(days: DemoDays): string {
  const random = seededRandom(911);
  const lines = Array.from({ length: seasonDays }, (_, at) => {
    const offset = at - seasonDays;
    const season = Math.cos(((offset - hottest) / 365) * 2 * Math.PI);
    const max = 20 + 11 * season + 2.4 * randomNormal(random);
    const min = max - 11 - 2 * random();
    const wet = offset === -10 ? 14.2 : offset === -9 ? 6.4 : random() < 0.12 ? 1 + 6 * random() : 0;
    return `${days.day(offset)},${max.toFixed(1)},${min.toFixed(1)},${wet.toFixed(1)}`;
  });
  return ['date,max °C,min °C,rain mm', ...lines].join('\n');
}
