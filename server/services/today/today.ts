import { may, type Permission, type Reach } from '../../../shared/catalog/permissions.ts';
import type { TodayLine, TodayView } from '../../../shared/contracts/today.ts';
import type { Access } from '../../access/access.ts';
import { dayIn } from '../../../shared/season/dayIn.ts';
import { Estate } from '../../models/Estate.ts';
import { conflictLines, labelLines, markLines, noticeLines, roundLines } from './fieldLines.ts';
import { lackingLines, questionLines, restrictionLines, zoningLines } from './groundLines.ts';
import { backupLines, bagLines, lotLines, mailLines, provisionalLines } from './houseLines.ts';
import { countSetUp } from './setUp.ts';

export interface Moment {
  now: Date;
  /** Calendar day at the estate. */
  day: string;
}

type Gather = (access: Access, moment: Moment) => Promise<TodayLine[]>;

/** What is gathered, in the order it is shown: safety first, then what others wait for, then what has time. The right says for whom. */
const gatherers: readonly (readonly [Permission, Reach, Gather])[] = [
  ['restrictions.see', 'read', restrictionLines],
  ['notices.acknowledge', 'own', noticeLines],
  ['readings.record', 'own', roundLines],
  ['readings.correct', 'do', conflictLines],
  ['labels.settle', 'do', labelLines],
  ['layers.import', 'do', questionLines],
  ['zones.edit', 'propose', zoningLines],
  ['plans.margins', 'propose', lackingLines],
  ['census.edit', 'do', markLines],
  ['results.check', 'do', provisionalLines],
  ['lab.enter', 'propose', bagLines],
  ['lots.see', 'read', lotLines],
  ['mail.see', 'do', mailLines],
  ['estate.backup', 'do', backupLines],
];

/** What waits for this person in this estate today. One small query a kind of thing; nothing is computed anew. */
export async function today(access: Access, now: Date): Promise<TodayView> {
  const { timeZone } = await Estate.query().findById(access.estateId).select('timeZone').throwIfNotFound();
  const moment = { now, day: dayIn(timeZone, now) };
  const wanted = gatherers.filter(([action, atLeast]) => may(access.roles, action, atLeast));
  const [setUp, ...groups] = await Promise.all([countSetUp(access.estateId), ...wanted.map(([, , gather]) => gather(access, moment))]);
  return { day: moment.day, lines: groups.flat(), setUp };
}
