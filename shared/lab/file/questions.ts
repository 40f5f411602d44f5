import type { LabAnswers, LabChoice, LabQuestion, LabWord, Params } from './labFile.ts';

/** Collects what is said and asked while a file is read; an answer that is not among the choices counts as none. */
export class Asking {
  readonly words: LabWord[] = [];
  readonly questions: LabQuestion[] = [];
  readonly #answers: LabAnswers;

  constructor(answers: LabAnswers) {
    this.#answers = answers;
  }

  say(code: string, params: Params = {}): void {
    if (!this.words.some((word) => word.code === code && JSON.stringify(word.params) === JSON.stringify(params))) this.words.push({ code, params });
  }

  /** The answer, or null while nobody has given one. */
  ask(key: string, asked: { code: string; params?: Params; choices: readonly (string | LabChoice)[]; suggestion?: string | null }): string | null {
    const choices = asked.choices.map((choice) => (typeof choice === 'string' ? { value: choice, label: null } : choice));
    const given = this.#answers[key];
    const answer = given !== undefined && choices.some(({ value }) => value === given) ? given : null;
    const suggestion = asked.suggestion !== undefined && choices.some(({ value }) => value === asked.suggestion) ? (asked.suggestion ?? null) : null;
    const question = { key, code: asked.code, params: asked.params ?? {}, choices, suggestion, answer };
    const before = this.questions.findIndex((each) => each.key === key);
    if (before < 0) this.questions.push(question);
    return answer;
  }
}
