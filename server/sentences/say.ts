import type { Language } from '../../shared/contracts/common.ts';
import { en, type SentenceKey } from './en.ts';
import { es } from './es.ts';
import { fr } from './fr.ts';
import { it } from './it.ts';
import { pt } from './pt.ts';

/** What fills a place in a sentence: a word or number as it is, or something that each language writes in its own way. */
export type Fact = string | number | Sentence | Sentences | Moment | Names;
interface Moment {
  readonly moment: Date;
  readonly timeZone: string;
}
interface Sentences {
  readonly all: readonly Sentence[];
}
interface Names {
  readonly oneOf: readonly string[];
}

/** A sentence that is not in any language yet. */
export interface Sentence {
  readonly key: SentenceKey;
  readonly facts: Readonly<Record<string, Fact>>;
}

const catalogs: Record<Language, Record<SentenceKey, string>> = { en, es, fr, it, pt };
const regions: Record<Language, string> = { en: 'en-GB', es: 'es-ES', fr: 'fr-FR', it: 'it-IT', pt: 'pt-PT' };

/** Names a sentence and what fills its places. Of two forms divided by " | " the number `n` chooses. */
export function say(key: SentenceKey, facts: Readonly<Record<string, Fact>> = {}): Sentence {
  return { key, facts };
}

export function sentenceIn(language: Language, { key, facts }: Sentence): string {
  const [one, many = one] = catalogs[language][key].split(' | ') as [string, string?];
  const form = facts.n === 1 ? one : many;
  return form.replace(/\{(\w+)\}/g, (place, name: string) => (facts[name] === undefined ? place : factIn(language, facts[name])));
}

function factIn(language: Language, fact: Fact): string {
  if (typeof fact === 'string') return fact;
  if (typeof fact === 'number') return String(fact);
  if ('key' in fact) return sentenceIn(language, fact);
  if ('all' in fact) return fact.all.map((each) => sentenceIn(language, each)).join('; ');
  if ('oneOf' in fact) return new Intl.ListFormat(regions[language], { type: 'disjunction' }).format(fact.oneOf);
  return new Intl.DateTimeFormat(regions[language], { timeZone: fact.timeZone, weekday: 'short', day: 'numeric', month: 'short', year: 'numeric', hour: '2-digit', minute: '2-digit' }).format(fact.moment);
}
