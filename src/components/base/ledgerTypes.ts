/** What a column of a ledger is for; it decides alignment, weight and where the cell goes on a phone. */
export type LedgerColumnKind = 'name' | 'figure' | 'mark' | 'words' | 'state' | 'control';

/** Place of a cell in the one-column phone form: under the name, at the right, on a line of its own, or left out. */
export type LedgerPhonePlace = 'second' | 'due' | 'below' | 'hidden';

/** Widths of a ledger in px below which a column may be left out; ledger.css has a rule for each, since a query of a container takes no variable. */
export const hideWidths = [520, 640, 720, 760, 860, 900] as const;

export interface LedgerColumn<T> {
  /** Names the slots `cell-<id>`, `head-<id>` and `sum-<id>`. */
  readonly id: string;
  /** Column head, translated; empty for a column whose cells speak for themselves. */
  readonly label: string;
  readonly kind?: LedgerColumnKind;
  /** Text of the cell when there is no slot for it. */
  readonly text?: (line: T) => string;
  /** CSS width of the column, such as "96px" or "20%". */
  readonly width?: string;
  /** Sorts ascending by this value; heads of such columns become buttons. */
  readonly sortBy?: (line: T) => number | string | null;
  readonly phone?: LedgerPhonePlace;
  /** Left out while the ledger is narrower than this many px; in the phone form `phone` alone decides. */
  readonly hideBelow?: (typeof hideWidths)[number];
}

/** How a line stands: at rest, asking for an answer, refused or restricted, taken out. */
export type LedgerLineState = 'rest' | 'asks' | 'refused' | 'takenOut';

/** Height of lines: 40, 56 for two-line cells and evidence marks, 32, 39. */
export type LedgerDensity = 'line' | 'tall' | 'compact' | 'lot';

export interface LedgerSort {
  readonly column: string;
  readonly descending: boolean;
}
