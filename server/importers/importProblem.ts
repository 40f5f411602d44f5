/** Why a file was refused. The screens translate by code; the English sentence is complete in itself. */
export type ImportProblemCode =
  | 'empty'
  | 'truncated'
  | 'damaged'
  | 'wrong-type'
  | 'unsupported-encoding'
  | 'too-large'
  | 'unsafe-archive'
  | 'encrypted'
  | 'mask-misfit'
  | 'missing-part'
  | 'no-layer'
  | 'no-reference'
  | 'unknown-reference'
  | 'reference-contradiction'
  | 'no-placement'
  | 'not-overlapping'
  | 'no-values'
  | 'bad-geometry'
  | 'no-coordinates'
  | 'bad-request';

export interface ImportProblemParts {
  code: ImportProblemCode;
  /** What was found, with its value, as a sentence. */
  fact: string;
  /** What the person can do, as a sentence. */
  remedy: string;
  /** Values of the fact, for translated texts. */
  params?: Readonly<Record<string, string | number>>;
  /** Name of the file as its owner knows it. */
  file?: string;
  cause?: unknown;
}

/** A file that cannot be used as it is. `message` says file, fact and remedy; it is shown to people as it is. */
export class ImportProblem extends Error {
  readonly code: ImportProblemCode;
  readonly fact: string;
  readonly remedy: string;
  readonly params: Readonly<Record<string, string | number>>;
  readonly file: string | null;

  constructor(parts: ImportProblemParts) {
    const start = parts.file === undefined ? '' : `${shownFileName(parts.file)}: `;
    super(`${start}${parts.fact} ${parts.remedy}`, { cause: parts.cause });
    this.name = 'ImportProblem';
    this.code = parts.code;
    this.fact = parts.fact;
    this.remedy = parts.remedy;
    this.params = parts.params ?? {};
    this.file = parts.file ?? null;
  }
}

/** A file name made safe for one line of text: no control or direction marks, no path, at most 80 characters. */
export function shownFileName(name: string): string {
  // Control and text-direction characters could hide or reorder the rest of the sentence.
  const plain = name.replace(/[\p{Cc}\p{Cf}\p{Co}\p{Cs}\u2028\u2029]/gu, '').split(/[\\/]/).pop()!.trim();
  if (plain === '') return 'the file';
  const letters = [...plain];
  return letters.length <= 80 ? plain : `${letters.slice(0, 60).join('')}…${letters.slice(-16).join('')}`;
}

/**
 * Runs a reader so that whatever goes wrong inside ends as one ImportProblem that names the file.
 * An error that is not ours comes from a parser meeting bytes it cannot follow: it is kept as the cause.
 */
export async function naming<T>(file: string, read: () => Promise<T>): Promise<T> {
  try {
    return await read();
  } catch (error) {
    if (error instanceof ImportProblem) {
      if (error.file !== null) throw error;
      throw new ImportProblem({ code: error.code, fact: error.fact, remedy: error.remedy, params: error.params, file, cause: error.cause });
    }
    // A library's advice to its own users comes after its first sentence.
    const detail = error instanceof Error ? error.message.split(/\.\s/)[0]!.slice(0, 160) : 'unknown error';
    throw new ImportProblem({
      code: 'damaged',
      fact: `Its contents cannot be followed (${detail}).`,
      remedy: 'Export the file again from the program that made it, or copy it again.',
      params: { detail },
      file,
      cause: error,
    });
  }
}
