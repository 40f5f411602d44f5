import { estateSettings } from '../../../shared/contracts/estate.ts';
import type { Access } from '../../access/access.ts';
import { Missing } from '../../errors.ts';
import { daySheet, type DayPart } from '../../exporters/daySheet.ts';
import { fileName } from '../../exporters/fileName.ts';
import { sheetTexts, type SheetLanguage } from '../../exporters/sheetTexts.ts';
import type { EntryRestriction } from '../../models/EntryRestriction.ts';
import { Estate } from '../../models/Estate.ts';
import { Person } from '../../models/Person.ts';
import { Round } from '../../models/Round.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import { closedWords, longestOn } from './closedOn.ts';
import { dayStops } from './dayStops.ts';
import { seesOwnRoundsOnly } from './listRounds.ts';

/** The order of everybody's blocks on a day, a page a person in that person's language; crew print their own. */
export async function printDay(access: Access, { onDate, paper, now }: { onDate: string; paper: 'a4' | 'letter'; now: Date }): Promise<{ name: string; body: Buffer }> {
  const { estateId } = access;
  const rounds = await Round.query().where({ estateId, onDate }).whereNot({ state: 'called off' }).select('id', 'blockId');
  const members = await RoundPerson.query().where({ estateId }).whereIn('roundId', rounds.map(({ id }) => id)).select('personId');
  const ids = [...new Set(members.map(({ personId }) => personId))].filter((id) => !seesOwnRoundsOnly(access) || id === access.personId);
  if (ids.length === 0) throw new Missing();
  const [people, estate] = await Promise.all([Person.query().findByIds(ids).orderBy('name').select('id', 'name', 'language'), Estate.query().findById(estateId).throwIfNotFound()]);
  const { meetingPoint, emergencyNumber } = estateSettings.parse(estate.settings);
  const parts: DayPart[] = [];
  const closed = new Map<string, EntryRestriction>();
  for (const { id, blockId } of rounds) {
    const found = await longestOn(undefined, { estateId, blockId, day: onDate, timeZone: estate.timeZone });
    if (found) closed.set(id, found);
  }
  for (const { id, name, language } of people) {
    const spoken = language in sheetTexts ? (language as SheetLanguage) : ('en' as const);
    const stops = await dayStops(estateId, { personId: id, onDate });
    parts.push({ person: name, language: spoken, stops: stops.map((stop) => ({ ...stop, closed: closed.has(stop.roundId) ? closedWords(closed.get(stop.roundId)!, spoken, estate.timeZone) : null })) });
  }
  const body = await daySheet(parts, { paper, estateName: estate.name, onDate, meetingPoint, emergencyNumber, at: now });
  return { name: fileName([estate.name, onDate], 'pdf'), body };
}
