import { AnalysisError } from '../shared/analysis/analysisError.ts';
import { MulterError } from 'multer';
import { ForeignKeyViolationError, NotFoundError, UniqueViolationError } from 'objection';
import { ZodError } from 'zod';

/** Something a person asked for that cannot be done, said in a sentence that names fact, value and remedy. */
export class ExpectedError extends Error {
  readonly code: string;
  readonly extra: Record<string, unknown>;

  constructor(code: string, message: string, extra: Record<string, unknown> = {}) {
    super(message);
    this.code = code;
    this.extra = extra;
  }
}

/** Nobody is signed in. */
export class NotSignedIn extends ExpectedError {
  constructor(message = 'Sign in to go on.') {
    super('notSignedIn', message);
  }
}

/** The person's roles in this estate do not reach so far. */
export class NotAllowed extends ExpectedError {
  constructor(message = 'Your role in this estate does not allow this. Ask the owner who may.') {
    super('notAllowed', message);
  }
}

/** Not there, or not in this estate: both answer the same. */
export class Missing extends ExpectedError {
  constructor(message = 'Nothing is found at this address in this estate.') {
    super('notFound', message);
  }
}

/** The state of things forbids it (taken name, running job, vine already in a lot). */
export class Clash extends ExpectedError {}

/** Somebody changed the thing since it was read; `extra.current` holds its new state where that helps. */
export class Stale extends ExpectedError {}

/** A change of something that two people can edit came without saying which version it was made on. */
export class Unconditional extends ExpectedError {
  constructor() {
    super('noVersion', 'Say which version this change was made on: send the ETag that you read as If-Match.');
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

type Kind = abstract new (...args: never[]) => Error;

const row = <E extends Error>(kind: abstract new (...args: never[]) => E, status: number, title: string, rest: (error: E) => Omit<Problem, 'status' | 'title'>) => ({
  kind: kind as Kind,
  status,
  title,
  rest: rest as (error: Error) => Omit<Problem, 'status' | 'title'>,
});

const said = (error: ExpectedError) => ({ code: error.code, detail: error.message, extra: error.extra });

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
  row(AnalysisError, 422, 'Cannot be computed', (error) => ({ code: error.code, detail: error.message })),
  row(ZodError, 422, 'Cannot be used', (error) => ({
    code: 'badInput',
    detail: error.issues.map((issue) => `${issue.path.join('.') || 'input'}: ${issue.message}`).join('; '),
    errors: error.issues.map((issue) => ({ path: issue.path.join('.'), message: issue.message })),
  })),
  row(NotFoundError, 404, 'Not found', () => ({ code: 'notFound', detail: 'Nothing is found at this address in this estate.' })),
  row(UniqueViolationError, 409, 'Clash', (error) => ({ code: 'taken', detail: `This is taken already: ${error.columns.filter((column) => column !== 'estate_id').join(', ') || 'name'}. Choose another.` })),
  row(ForeignKeyViolationError, 409, 'Clash', () => ({ code: 'stillUsed', detail: 'Something that this refers to is not in this estate, or is still in use.' })),
  row(MulterError, 422, 'Cannot be used', (error) => ({
    code: error.code === 'LIMIT_FILE_SIZE' ? 'fileTooLarge' : 'badUpload',
    detail: error.code === 'LIMIT_FILE_SIZE' ? 'This file is larger than this server accepts. Cut it to the estate or ask for a higher limit.' : `The upload could not be read: ${error.message}. Send the files in the field "files".`,
  })),
];

const exclusionViolation = '23P01';
const deadlock = '40P01';
/** Text with the character NUL, in a column of text or of JSON: PostgreSQL keeps neither. */
const unstorableText = new Set(['22021', '22P05']);

/** Turns anything thrown into one reply shape. Unknown errors give a fixed sentence: their own words stay in the log. */
export function problemOf(error: unknown): Problem {
  for (const entry of table) {
    if (error instanceof entry.kind) return { status: entry.status, title: entry.title, ...entry.rest(error) };
  }
  if (isImportProblem(error)) return { status: 422, title: 'File refused', code: error.code, detail: error.message };
  if (nativeCode(error) === exclusionViolation) return { status: 409, title: 'Clash', code: 'vineTwice', detail: 'Some of these vines are in another lot already. Take them out there first.' };
  if (nativeCode(error) === deadlock) return { status: 409, title: 'Clash', code: 'atOnce', detail: 'Somebody changed the same thing at the same moment. Nothing of yours was changed; look again and repeat the step.' };
  if (unstorableText.has(nativeCode(error) ?? '')) return { status: 422, title: 'Cannot be used', code: 'badInput', detail: 'The text holds a character that cannot be kept (NUL). Type it anew instead of pasting it.' };
  const status = httpStatus(error);
  if (status !== null) return { status, title: 'Bad request', code: 'badRequest', detail: status === 413 ? 'This request is too large.' : 'This request could not be read. Check its form and try again.' };
  return { status: 500, title: 'Fault', code: 'fault', detail: 'Something went wrong on our side. Nothing was changed; try again, and tell us if it stays.' };
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
