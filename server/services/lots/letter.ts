import type { Access } from '../../access/access.ts';
import { Missing } from '../../errors.ts';
import { fileName } from '../../exporters/fileName.ts';
import { seasonLetter as letterPdf } from '../../exporters/report/seasonLetter.ts';
import { seasonLetterTexts, type LetterLanguage } from '../../exporters/report/seasonLetterTexts.ts';
import { Estate } from '../../models/Estate.ts';
import { Person } from '../../models/Person.ts';
import { seasonReview } from './review.ts';
import { say } from '../../sentences/say.ts';

/** Half a page on a block's season, in the language and units of whoever prints it. */
export async function seasonLetter(access: Access, blockId: string, options: { size: 'A4' | 'Letter'; today: string; now: Date }): Promise<{ name: string; body: Buffer }> {
  const review = await seasonReview(access, { today: options.today });
  const block = review.blocks.find((one) => one.blockId === blockId);
  if (!block) throw new Missing(say('noLetter'));
  const [person, estate] = await Promise.all([Person.query().findById(access.personId).throwIfNotFound(), Estate.query().findById(access.estateId).throwIfNotFound()]);
  const zones = review.zones.filter((zone) => zone.blockId === blockId);
  const body = await letterPdf({
    language: person.language in seasonLetterTexts ? (person.language as LetterLanguage) : 'en',
    size: options.size, units: person.units, now: options.now, timeZone: estate.timeZone, estateName: estate.name, seasonName: review.seasonName,
    block, zones, errorParts: block.errorParts,
  });
  return { name: fileName([block.blockName, review.seasonName], 'pdf'), body };
}
