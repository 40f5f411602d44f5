/** One place in the input that was refused; `path` as the contract names it ("boundary.coordinates"). */
export interface FieldProblem {
  readonly path: string;
  readonly message: string;
}

interface ProblemFacts {
  readonly status: number;
  readonly code: string;
  readonly title: string;
  readonly detail: string;
  readonly errors?: readonly FieldProblem[];
  readonly facts?: Readonly<Record<string, unknown>>;
  readonly cause?: unknown;
}

/** A request that did not end well. Status 0 with code `offline` means that no answer came. */
export class HttpProblem extends Error {
  override readonly name = 'HttpProblem';
  readonly status: number;
  readonly code: string;
  readonly title: string;
  readonly detail: string;
  readonly errors: readonly FieldProblem[];
  /** Whatever else the server said, such as what changed meanwhile. */
  readonly facts: Readonly<Record<string, unknown>>;

  constructor({ status, code, title, detail, errors = [], facts = {}, cause }: ProblemFacts) {
    super(detail === '' ? title : detail, { cause });
    this.status = status;
    this.code = code;
    this.title = title;
    this.detail = detail;
    this.errors = errors;
    this.facts = facts;
  }

  get isOffline(): boolean {
    return this.status === 0;
  }

  /** No answer came to something that was sent: the server may have taken it. */
  get mayHaveArrived(): boolean {
    return this.isOffline && this.facts.sent === true;
  }

  /** Somebody else changed the same thing (409, 412). */
  get isClash(): boolean {
    return this.status === 409 || this.status === 412;
  }

  /** First message for a field, or null. */
  messageFor(path: string): string | null {
    return this.errors.find((error) => error.path === path)?.message ?? null;
  }
}

/** Reads a problem+json body; anything else becomes a plain problem with the status. */
export function problemFrom(status: number, body: unknown): HttpProblem {
  const { type: _type, status: _status, title, detail, code, errors, ...facts } = isRecord(body) ? body : {};
  return new HttpProblem({
    status,
    code: typeof code === 'string' ? code : 'unknown',
    title: typeof title === 'string' ? title : '',
    detail: typeof detail === 'string' ? detail : '',
    errors: Array.isArray(errors) ? errors.filter(isFieldProblem) : [],
    facts,
  });
}

/** `sent`: a change was on its way. */
export function offlineProblem(cause?: unknown, { sent = false }: { sent?: boolean } = {}): HttpProblem {
  return new HttpProblem({ status: 0, code: 'offline', title: '', detail: '', facts: { sent }, cause });
}

function isRecord(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

function isFieldProblem(value: unknown): value is FieldProblem {
  return isRecord(value) && typeof value.path === 'string' && typeof value.message === 'string';
}
