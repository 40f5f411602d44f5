import { dayIn } from '../../shared/season/dayIn.ts';
import { instantAt } from '../../shared/season/wallClock.ts';
import { Estate } from '../models/Estate.ts';

/** The calendar day that it is at the estate, as yyyy-mm-dd: intervals before picking and seasons go by it, not by the server's clock. */
export async function estateDay(estateId: string, now: Date): Promise<string> {
  const { timeZone } = await Estate.query().findById(estateId).select('timeZone').throwIfNotFound();
  return dayIn(timeZone, now);
}

const dayMs = 86_400_000;

/** The last moment of a calendar day at the estate. */
export async function endOfEstateDay(estateId: string, day: string): Promise<Date> {
  const { timeZone } = await Estate.query().findById(estateId).select('timeZone').throwIfNotFound();
  const next = new Date(Date.parse(`${day}T00:00:00Z`) + dayMs).toISOString().slice(0, 10);
  return new Date(instantAt(timeZone, `${next}T00:00`).getTime() - 1);
}
