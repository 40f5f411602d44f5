import type { NewEstate } from '../../../shared/contracts/estate.ts';
import type { Language } from '../../lib/format.ts';

/** An estate before anybody said anything of it: the device's own clock, and the reader's language. */
export function startingFacts(language: string): NewEstate {
  const timeZone = Intl.DateTimeFormat().resolvedOptions().timeZone;
  return { name: '', country: '', timeZone, units: 'metric', languages: [language as Language], seasonStartMonth: southern.test(timeZone) ? 6 : 12, marker: null };
}

/** Seasons begin after the pick: in December north of the equator, in June south of it. */
const southern = /^(Australia\/|Africa\/(Johannesburg|Maputo|Harare)|Pacific\/Auckland|America\/(Argentina\/|Santiago|Sao_Paulo|Montevideo|Buenos_Aires))/;
