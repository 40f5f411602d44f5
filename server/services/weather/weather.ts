import type { z } from 'zod';
import type { weatherDay, weatherFile, WeatherReading, WeatherView } from '../../../shared/contracts/weather.ts';
import { heatSince } from '../../../shared/ripening/visitWeather.ts';
import { readWeather, type WeatherDay } from '../../../shared/ripening/weatherTable.ts';
import type { Transaction } from 'objection';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import { WeatherDayRecord } from '../../models/WeatherDayRecord.ts';
import { say } from '../../sentences/say.ts';

const shownProblems = 20;
const chunk = 500;

/** Weather of the estate, oldest first, and the heat of the season so far. */
export async function listWeather(access: Access, options: { today: string }): Promise<WeatherView> {
  const rows = await WeatherDayRecord.query().where({ estateId: access.estateId }).orderBy('day');
  const block = await Block.query().where({ estateId: access.estateId }).select('epsg').first();
  const days = rows.map(({ day, maxC, minC, rainMm, source }) => ({ day, maxC, minC, rainMm, source }));
  return { days, heat: heatSince(days, { south: isSouth(block?.epsg ?? null), until: options.today }) };
}

/** UTM zones of the southern half are numbered from 32700 on. */
function isSouth(epsg: number | null): boolean {
  return epsg !== null && epsg >= 32_700 && epsg < 32_800;
}

/** Keeps a day as typed; a day that was known is replaced, and both stand in the history. */
export async function typeWeather(access: Access, input: z.infer<typeof weatherDay>, now: Date): Promise<void> {
  requirePast([input], now);
  await WeatherDayRecord.transaction(async (trx) => {
    const before = await WeatherDayRecord.query(trx).findOne({ estateId: access.estateId, day: input.day }).select('maxC', 'minC', 'rainMm');
    await keep(trx, access, { days: [input], source: 'typed', now });
    await writeAudit(trx, access, { action: 'weather.type', subjectType: 'weather', subjectId: access.estateId, subjectName: input.day, before: before ?? null, after: input });
  });
}

export async function forgetWeather(access: Access, day: string): Promise<void> {
  await WeatherDayRecord.transaction(async (trx) => {
    const row = await WeatherDayRecord.query(trx).findOne({ estateId: access.estateId, day }).throwIfNotFound();
    await row.$query(trx).delete();
    await writeAudit(trx, access, { action: 'weather.delete', subjectType: 'weather', subjectId: access.estateId, subjectName: day, before: { maxC: row.maxC, minC: row.minC, rainMm: row.rainMm } });
  });
}

/** Reads a station's table back; keeps all of it when asked to and nothing is left to settle. */
export async function importWeather(access: Access, file: z.infer<typeof weatherFile>, now: Date): Promise<WeatherReading> {
  const read = readWeather(file.text, file);
  const known = new Set((await WeatherDayRecord.query().where({ estateId: access.estateId }).select('day')).map(({ day }) => day));
  const view = { ...read, days: [...read.days], questions: [...read.questions], columns: [...read.columns], problems: read.problems.slice(0, shownProblems), replaces: read.days.filter(({ day }) => known.has(day)).length, kept: 0 };
  if (!file.apply) return view;
  if (read.questions.length > 0) throw new Clash('tableQuestions', say('tableQuestions'));
  if (read.problems.length > 0) throw new Unusable('tableProblems', say('tableProblems', { n: read.problems.length }));
  requirePast(read.days, now);
  await WeatherDayRecord.transaction(async (trx) => {
    for (let from = 0; from < read.days.length; from += chunk) await keep(trx, access, { days: read.days.slice(from, from + chunk), source: 'imported', now });
    await writeAudit(trx, access, { action: 'weather.import', subjectType: 'weather', subjectId: access.estateId, subjectName: `${read.days[0]!.day} – ${read.days.at(-1)!.day}`, after: { days: read.days.length, replaced: view.replaces } });
  });
  return { ...view, kept: read.days.length };
}

async function keep(trx: Transaction, access: Access, facts: { days: readonly WeatherDay[]; source: 'typed' | 'imported'; now: Date }): Promise<void> {
  const rows = facts.days.map((day) => ({ ...day, estateId: access.estateId, source: facts.source, enteredBy: access.personId, enteredAt: facts.now }));
  await WeatherDayRecord.query(trx).insert(rows).onConflict(['estateId', 'day']).merge(['maxC', 'minC', 'rainMm', 'source', 'enteredBy', 'enteredAt']);
}

function requirePast(days: readonly { day: string }[], now: Date): void {
  // A day ahead may already have begun east of Greenwich.
  const latest = new Date(now.getTime() + 86_400_000).toISOString().slice(0, 10);
  const ahead = days.find(({ day }) => day > latest);
  if (ahead) throw new Unusable('weatherAhead', say('weatherAhead', { day: ahead.day }));
}
