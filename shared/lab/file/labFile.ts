/** A laboratory's file as its reader hands it on, and what is understood of it. Pure shapes; texts are put in by the screens. */

/** A cell as the file holds it. A spreadsheet knows numbers and dates; in text files every cell is text. */
export type RawCell = string | number | boolean | { readonly date: string } | null;

export interface RawSheet {
  readonly name: string;
  readonly rows: readonly (readonly RawCell[])[];
  /** What the spreadsheet does not show: indexes of rows and columns. */
  readonly hidden?: { readonly rows: readonly number[]; readonly columns: readonly number[] };
  /** Formulas whose result was not stored: the cells are empty here. */
  readonly emptyFormulas?: number;
}

export interface RawLabFile {
  readonly kind: 'text' | 'spreadsheet';
  readonly encoding: string | null;
  readonly separator: string | null;
  readonly sheets: readonly RawSheet[];
}

/** A measure of the estate as far as reading needs it. */
export interface LabMeasure {
  readonly code: string;
  readonly name: string;
  readonly unit: string;
  readonly decimals: number;
  readonly minimum: number;
  readonly maximum: number;
}

/** A bag that results can be for. */
export interface KnownLabel {
  readonly code: string;
  /** yyyy-mm-dd of its closing; null for a bag that nobody has sent yet. */
  readonly closedOn: string | null;
  /** Measures that have results already. */
  readonly has: readonly string[];
}

export interface LabSurroundings {
  readonly measures: readonly LabMeasure[];
  readonly labels: readonly KnownLabel[];
  readonly today: string;
}

export type Params = Readonly<Record<string, string | number>>;

/** A sentence about the file: the screens have its words under `lab.word.<code>`. */
export interface LabWord {
  readonly code: string;
  readonly params: Params;
}

export interface LabChoice {
  readonly value: string;
  /** Its own words, such as a column title or a bag label; null where the screens have them. */
  readonly label: string | null;
}

/** Something only a person can say. Nothing is stored while a question is open. */
export interface LabQuestion {
  /** Under which the answer is kept; with a colon before what it is about. */
  readonly key: string;
  readonly code: string;
  readonly params: Params;
  readonly choices: readonly LabChoice[];
  readonly suggestion: string | null;
  readonly answer: string | null;
}

/** One result to be stored. */
export interface LabEntry {
  /** Line in the file, counted as a spreadsheet does. */
  readonly line: number;
  readonly code: string;
  readonly measure: string;
  /** In the measure's own unit. */
  readonly value: number;
  readonly below: boolean;
  /** As it stood in the file, with the unit it was taken in. */
  readonly typed: string;
  readonly unitTyped: string;
  readonly analysedOn: string | null;
  /** Beyond the measure's usual range: kept, and marked. */
  readonly odd: boolean;
  /** Corrected to 20 °C here. */
  readonly corrected: boolean;
}

export type LabAnswers = Readonly<Record<string, string>>;

export interface UnderstoodLabFile {
  readonly words: readonly LabWord[];
  readonly questions: readonly LabQuestion[];
  readonly entries: readonly LabEntry[];
  /** Titles of the columns that were used, by which a file of the same make is known again. */
  readonly signature: string;
}

/** Answers that hold for the next file of the same laboratory too; others are about one row or one accident. */
export function isRemembered(key: string): boolean {
  return /^(sheet|codeColumn|decimal|dateOrder|compensates|repeats|columns?:|unit:)/.test(key);
}
