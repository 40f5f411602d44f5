import { dayIn } from '../../shared/season/dayIn.ts';
import { Estate } from '../models/Estate.ts';

/** The calendar day that it is at the estate, as yyyy-mm-dd: intervals before picking and seasons go by it, not by the server's clock. */
export async function estateDay(estateId: string, now: Date): Promise<string> {
  const { timeZone } = await Estate.query().findById(estateId).select('timeZone').throwIfNotFound();
  return dayIn(timeZone, now);
}
