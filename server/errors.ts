import { AnalysisError } from '../shared/analysis/analysisError.ts';
import { MulterError } from 'multer';
import { ForeignKeyViolationError, NotFoundError, UniqueViolationError } from 'objection';
import { ZodError } from 'zod';
import type { Language } from '../shared/contracts/common.ts';
import { computationWords } from './sentences/computationWords.ts';
import { inputWords } from './sentences/inputWords.ts';
import { say, sentenceIn, type Sentence } from './sentences/say.ts';

/**
 * Something a person asked for that cannot be done, said in a sentence that names fact, value and remedy. The message is
 * English, for the log; the answer is in the language of whoever asked. Text instead of a sentence is passed on as it is.
 */
export class ExpectedError extends Error {
  readonly code: string;
  readonly said: Sentence | string;
  readonly extra: Record<string, unknown>;

  constructor(code: string, said: Sentence | string, extra: Record<string, unknown> = {}) {
    super(textIn('en', said));
    this.code = code;
    this.said = said;
    this.extra = extra;
  }
}

function textIn(language: Language, said: Sentence | string): string {
  return typeof said === 'string' ? said : sentenceIn(language, said);
}

/** Nobody is signed in. */
export class NotSignedIn extends ExpectedError {
  constructor(said = say('signIn')) {
    super('notSignedIn', said);
  }
}

/** The person's roles in this estate do not reach so far. */
export class NotAllowed extends ExpectedError {
  constructor(said = say('roleForbids')) {
    super('notAllowed', said);
  }
}

/** Not there, or not in this estate: both answer the same. */
export class Missing extends ExpectedError {
  constructor(said = say('nothingHere')) {
    super('notFound', said);
  }
}

/** The state of things forbids it (taken name, running job, vine already in a lot). */
export class Clash extends ExpectedError {}

/** Somebody changed the thing since it was read; `extra.current` holds its new state where that helps. */
export class Stale extends ExpectedError {}

/** A change of something that two people can edit came without saying which version it was made on. */
export class Unconditional extends ExpectedError {
  constructor() {
    super('noVersion', say('noVersion'));
  }
}

/** Readable but unusable input. */
export class Unusable extends ExpectedError {}

/** Too many tries or too much at once. */
export class TooMuch extends ExpectedError {}

export interface Problem {
  status: number;
  code: string;
  title: string;
  detail: string;
  errors?: { path: string; message: string }[];
  extra?: Record<string, unknown>;
}

/** What an error says, before it is put in a language. */
interface Answer extends Omit<Problem, 'status' | 'title' | 'detail' | 'errors'> {
  detail: Sentence | string;
  errors?: { path: string; message: Sentence | string }[];
}

type Kind = abstract new (...args: never[]) => Error;

const row = <E extends Error>(kind: abstract new (...args: never[]) => E, status: number, title: string, rest: (error: E, language: Language) => Answer) => ({
  kind: kind as Kind,
  status,
  title,
  rest: rest as (error: Error, language: Language) => Answer,
});

const said = ({ code, said: detail, extra }: ExpectedError): Answer => ({ code, detail, extra });

function inputAnswer(error: ZodError, language: Language): Answer {
  const errors = error.issues.map((issue) => ({ path: issue.path.join('.'), message: inputWords(language, issue) }));
  return { code: 'badInput', detail: errors.map(({ path, message }) => `${path || 'input'}: ${message}`).join('; '), errors };
}

/** One row an error. Adding an error is one class and one row; the order decides, first match wins. */
const table = [
  row(NotSignedIn, 401, 'Not signed in', said),
  row(NotAllowed, 403, 'Not allowed', said),
  row(Missing, 404, 'Not found', said),
  row(Clash, 409, 'Clash', said),
  row(Stale, 412, 'Changed meanwhile', said),
  row(Unconditional, 428, 'Version needed', said),
  row(TooMuch, 429, 'Too much', said),
  row(Unusable, 422, 'Cannot be used', said),
  row(AnalysisError, 422, 'Cannot be computed', (error, language) => ({ code: error.code, detail: computationWords(language, error.message) })),
  row(ZodError, 422, 'Cannot be used', inputAnswer),
  row(NotFoundError, 404, 'Not found', () => ({ code: 'notFound', detail: say('nothingHere') })),
  row(UniqueViolationError, 409, 'Clash', (error) => ({ code: 'taken', detail: say('takenAlready', { what: takenWords(error.columns) }) })),
  row(ForeignKeyViolationError, 409, 'Clash', () => ({ code: 'stillUsed', detail: say('stillUsed') })),
  row(MulterError, 422, 'Cannot be used', (error) =>
    error.code === 'LIMIT_FILE_SIZE' ? { code: 'fileTooLarge', detail: say('fileTooLarge') } : { code: 'badUpload', detail: say('badUpload', { why: error.message }) },
  ),
];

const exclusionViolation = '23P01';
const deadlock = '40P01';
/** Text with the character NUL, in a column of text or of JSON: PostgreSQL keeps neither. */
const unstorableText = new Set(['22021', '22P05']);

/** What of a person's input is taken: never the columns that only say whose it is. */
function takenWords(columns: readonly string[]): Sentence | string {
  const own = columns.map((column) => column.replace(/^lower\((.+)\)$/, '$1')).filter((column) => !column.endsWith('_id') && column !== 'name');
  return own.join(', ') || say('aName');
}

/** Turns anything thrown into one reply shape, in a language. Unknown errors give a fixed sentence: their own words stay in the log. */
export function problemOf(error: unknown, language: Language = 'en'): Problem {
  const { detail, errors, ...rest } = answerTo(error, language);
  return {
    ...rest,
    detail: textIn(language, detail),
    ...(errors ? { errors: errors.map(({ path, message }) => ({ path, message: textIn(language, message) })) } : {}),
  };
}

function answerTo(error: unknown, language: Language): Answer & { status: number; title: string } {
  for (const entry of table) {
    if (error instanceof entry.kind) return { status: entry.status, title: entry.title, ...entry.rest(error, language) };
  }
  if (isImportProblem(error)) return { status: 422, title: 'File refused', code: error.code, detail: error.message };
  if (nativeCode(error) === exclusionViolation) return { status: 409, title: 'Clash', code: 'vineTwice', detail: say('vinesInAnotherLot') };
  if (nativeCode(error) === deadlock) return { status: 409, title: 'Clash', code: 'atOnce', detail: say('atOnce') };
  if (unstorableText.has(nativeCode(error) ?? '')) return { status: 422, title: 'Cannot be used', code: 'badInput', detail: say('unstorableText') };
  const status = httpStatus(error);
  if (status !== null) return { status, title: 'Bad request', code: 'badRequest', detail: say(status === 413 ? 'tooLarge' : 'unreadable') };
  return { status: 500, title: 'Fault', code: 'fault', detail: say('fault') };
}

/** Importers throw their own class; its name is enough here, so that errors do not import every reader. */
function isImportProblem(error: unknown): error is Error & { code: string } {
  return error instanceof Error && error.name === 'ImportProblem' && 'code' in error && typeof error.code === 'string';
}

/** Status of an error made by the body parser or another HTTP part, when it is the caller's fault. */
function httpStatus(error: unknown): number | null {
  if (typeof error !== 'object' || error === null || !('status' in error)) return null;
  return typeof error.status === 'number' && error.status >= 400 && error.status < 500 ? error.status : null;
}

function nativeCode(error: unknown): string | null {
  if (typeof error !== 'object' || error === null) return null;
  const native = 'nativeError' in error ? error.nativeError : error;
  return typeof native === 'object' && native !== null && 'code' in native && typeof native.code === 'string' ? native.code : null;
}
