import { z } from 'zod';
import type { Language } from '../../shared/contracts/common.ts';
import { es } from './inputs/es.ts';
import { fr } from './inputs/fr.ts';
import { it } from './inputs/it.ts';
import { pt } from './inputs/pt.ts';
import { plainInput } from './plainInput.ts';

type Issue = z.core.$ZodIssue;

/** The contracts speak English; their own sentences are found by it. What they leave to the library is said in our words, the rarest by the library. */
const languages = {
  en: { own: {} as Readonly<Record<string, string>>, library: z.locales.en().localeError },
  es: { own: es, library: z.locales.es().localeError },
  fr: { own: fr, library: z.locales.fr().localeError },
  it: { own: it, library: z.locales.it().localeError },
  pt: { own: pt, library: z.locales.pt().localeError },
};
const ofLibrary = /^(Invalid |Too (small|big): |Unrecognized key)/;

/** What is wrong with one place of the input, in a language. */
export function inputWords(language: Language, issue: Issue): string {
  const { own, library } = languages[language];
  if (!ofLibrary.test(issue.message)) return own[issue.message] ?? issue.message;
  return plainInput(language, issue) ?? textOf(library, issue);
}

function textOf(locale: z.core.$ZodErrorMap, issue: Issue): string {
  const told = locale(issue as z.core.$ZodRawIssue);
  return (typeof told === 'string' ? told : told?.message) ?? issue.message;
}
