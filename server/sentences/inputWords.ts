import { z } from 'zod';
import type { Language } from '../../shared/contracts/common.ts';
import { es } from './inputs/es.ts';
import { fr } from './inputs/fr.ts';
import { it } from './inputs/it.ts';
import { pt } from './inputs/pt.ts';

type Issue = z.core.$ZodIssue;

/** The contracts speak English; their own sentences are found by it, those of the library are said anew by the library. */
const languages = {
  es: { own: es, library: z.locales.es().localeError },
  fr: { own: fr, library: z.locales.fr().localeError },
  it: { own: it, library: z.locales.it().localeError },
  pt: { own: pt, library: z.locales.pt().localeError },
};
const english = z.locales.en().localeError;

/** What is wrong with one place of the input, in a language. */
export function inputWords(language: Language, issue: Issue): string {
  if (language === 'en') return issue.message;
  const { own, library } = languages[language];
  if (own[issue.message] !== undefined) return own[issue.message]!;
  return textOf(english, issue) === issue.message ? textOf(library, issue) : issue.message;
}

function textOf(locale: z.core.$ZodErrorMap, issue: Issue): string {
  const told = locale(issue as z.core.$ZodRawIssue);
  return (typeof told === 'string' ? told : told?.message) ?? issue.message;
}
