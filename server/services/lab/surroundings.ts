import type { LabSurroundings } from '../../../shared/lab/file/labFile.ts';
import type { Access } from '../../access/access.ts';
import { Bag } from '../../models/Bag.ts';
import { Estate } from '../../models/Estate.ts';
import { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Reading } from '../../models/Reading.ts';

const recentDays = 120;

/** What a file is read against: the measures of the lab, and the bags of this ripening with what they have already. */
export async function surroundings({ estateId }: Access, now: Date): Promise<LabSurroundings> {
  const estate = await Estate.query().findById(estateId).throwIfNotFound();
  const since = new Date(now.getTime() - recentDays * 86_400_000);
  const measures = await MeasureRecord.query().where({ estateId, measuredIn: 'lab', inUse: true }).orderBy('code');
  const bags = await Bag.query().where({ estateId }).whereNull('clashesWith').whereNotIn('state', ['void', 'printed']).whereRaw('coalesce(closed_at, received_at, created_at) >= ?', [since]).orderBy('code');
  const has = (await Reading.query().where({ estateId, source: 'lab' }).whereIn('bagId', bags.map(({ id }) => id)).distinct('bagId', 'measureCode')) as Pick<Reading, 'bagId' | 'measureCode'>[];
  const day = new Intl.DateTimeFormat('en-CA', { timeZone: estate.timeZone, year: 'numeric', month: '2-digit', day: '2-digit' });
  return {
    measures: measures.map(({ code, name, unit, decimals, minimum, maximum }) => ({ code, name, unit, decimals, minimum, maximum })),
    labels: bags.map((bag) => ({ code: bag.code, closedOn: bag.closedAt === null ? null : day.format(bag.closedAt), has: has.filter(({ bagId }) => bagId === bag.id).map(({ measureCode }) => measureCode) })),
    today: day.format(now),
  };
}
