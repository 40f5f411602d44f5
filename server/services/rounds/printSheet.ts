import type { Access } from '../../access/access.ts';
import { Missing } from '../../errors.ts';
import { crewSheet, type SheetPart } from '../../exporters/crewSheet.ts';
import { fileName } from '../../exporters/fileName.ts';
import { sheetTexts, type SheetLanguage } from '../../exporters/sheetTexts.ts';
import { Estate } from '../../models/Estate.ts';
import { Person } from '../../models/Person.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import { fieldRound } from './fieldRound.ts';
import { seesOwnRoundsOnly } from './listRounds.ts';

/** The sheets of a round, one a person in that person's language; crew print their own. */
export async function printSheet(access: Access, roundId: string, options: { paper: 'a4' | 'letter'; publicUrl: string; now: Date }): Promise<{ name: string; body: Buffer }> {
  const { estateId } = access;
  const members = await RoundPerson.query().where({ estateId, roundId });
  const ids = members.map(({ personId }) => personId).filter((id) => !seesOwnRoundsOnly(access) || id === access.personId);
  if (ids.length === 0) throw new Missing();
  const [people, estate] = await Promise.all([Person.query().findByIds(ids).select('id', 'name', 'language'), Estate.query().findById(estateId).throwIfNotFound()]);
  const parts: SheetPart[] = [];
  for (const person of people) {
    const round = await fieldRound({ ...access, personId: person.id }, roundId, options.now);
    parts.push({ round, person: person.name, language: person.language in sheetTexts ? (person.language as SheetLanguage) : 'en' });
  }
  const first = parts[0]!.round;
  const body = await crewSheet(parts, { paper: options.paper, timeZone: estate.timeZone, link: `${options.publicUrl}/e/${estateId}/field/rounds/${roundId}` });
  return { name: fileName([first.blockName, first.onDate], 'pdf'), body };
}
