import type { Language } from '../../shared/contracts/common.ts';
import { es } from './computations/es.ts';
import { fr } from './computations/fr.ts';
import { it } from './computations/it.ts';
import { pt } from './computations/pt.ts';
import { en, type SentenceKey } from './en.ts';
import { say, sentenceIn } from './say.ts';

/** Calculations speak English and know no languages; what they said is found again by its English form, facts and all. */
const languages = { es, fr, it, pt };
const computations = Object.keys(fr).map((english) => formOf(english, english));
const refusals = Object.entries(en).flatMap(([key, text]) => text.split(' | ').map((english) => formOf(key, english)));

interface Form {
  readonly key: string;
  readonly places: readonly string[];
  readonly pattern: RegExp;
}

function formOf(key: string, english: string): Form {
  const escaped = english.replace(/[.*+?^$()|[\]\\]/g, '\\$&').replace(/\{\w+\}/g, '(.+?)');
  return { key, places: [...english.matchAll(/\{(\w+)\}/g)].map(([, place]) => place!), pattern: new RegExp(`^${escaped}$`, 's') };
}

function factsOf({ places, pattern }: Form, text: string): Record<string, string> | null {
  const found = pattern.exec(text);
  return found && Object.fromEntries(places.map((place, at) => [place, found[at + 1]!]));
}

/** What a calculation could not use, in a language; a sentence that is not among ours stays as it is. */
export function computationWords(language: Language, text: string): string {
  if (language === 'en') return text;
  for (const form of computations) {
    const facts = factsOf(form, text);
    // A fact may be a word of ours itself, such as the name of a length.
    if (facts) return languages[language][form.key]!.replace(/\{(\d)\}/g, (_, at: string) => computationWords(language, facts[at]!));
  }
  return text;
}

/** Why a job failed, which is kept in English: said again in the language of who reads it. */
export function failureWords(language: Language, text: string): string {
  if (language === 'en') return text;
  for (const form of refusals) {
    const { n, ...facts } = factsOf(form, text) ?? { n: null };
    if (form.pattern.test(text)) return sentenceIn(language, say(form.key as SentenceKey, { ...facts, ...(n == null ? {} : { n: Number(n) }) }));
  }
  return computationWords(language, text);
}
