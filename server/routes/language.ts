import type { Request } from 'express';
import { languages, type Language } from '../../shared/contracts/common.ts';
import { failureWords } from '../sentences/computationWords.ts';

/** Pages ask in the language they are shown in (RFC 9110, 12.5.4). */
export function languageOf(request: Request): Language {
  return (request.acceptsLanguages([...languages]) || 'en') as Language;
}

/** An answer with the reason of a failed job in the language of who asked. */
export function inLanguageOf<Answer extends { readonly problem: string | null }>(request: Request, answer: Answer): Answer {
  return answer.problem === null ? answer : { ...answer, problem: failureWords(languageOf(request), answer.problem) };
}
