import type { RowXY } from '../geo/rowsLayout.ts';
import type { VineTable } from '../geo/vines.ts';
import type { LabMeasure, LabQuestion, LabWord, Params } from '../lab/file/labFile.ts';

/** A block as far as a table of earlier readings needs it; `named[i]` is `rows[i]`. */
export interface EarlierBlock {
  readonly id: string;
  readonly name: string;
  readonly plantedYear: number | null;
  readonly epsg: number;
  readonly vineOneEnd: 'start' | 'end';
  readonly withoutRows?: boolean;
  readonly named: readonly { readonly rowId: string; readonly label: string; readonly labelWas: string | null }[];
  readonly rows: readonly RowXY[];
  readonly vines: VineTable;
}

export interface EarlierSurroundings {
  readonly measures: readonly LabMeasure[];
  readonly blocks: readonly EarlierBlock[];
  /** Day at the estate, YYYY-MM-DD. */
  readonly today: string;
}

/** The vine that a line of the table is about. */
export interface EarlierPlace {
  readonly blockId: string;
  readonly rowId: string;
  readonly rowLabel: string;
  readonly ordinal: number;
  readonly vineNumber: number;
  /** Longitude and latitude, where vines stand without rows. */
  readonly place?: readonly [number, number] | undefined;
  /** From the point in the table to the vine; null where row and number name the vine. */
  readonly metres: number | null;
}

/** One reading to be stored. */
export interface EarlierEntry extends EarlierPlace {
  readonly line: number;
  readonly measure: string;
  /** In the measure's own unit. */
  readonly value: number;
  readonly below: boolean;
  readonly typed: string;
  readonly unitTyped: string;
  readonly day: string;
  /** Beyond the measure's usual range, or of a day before the block was planted: kept, and marked. */
  readonly odd: boolean;
  /** The vine has another value of the measure on the same day; both stay. */
  readonly isRepeat: boolean;
}

/** Why a line, or one cell of it, cannot be used. The screens have its sentence under `earlier.refused.<code>`. */
export interface RefusedPart {
  readonly line: number;
  readonly code: string;
  readonly params: Params;
}

export interface UnderstoodEarlier {
  readonly words: readonly LabWord[];
  /** A question without choices is answered by a day. */
  readonly questions: readonly LabQuestion[];
  readonly entries: readonly EarlierEntry[];
  readonly refused: readonly RefusedPart[];
  /** Lines below the titles that hold anything. */
  readonly lines: number;
  /** Titles by which a table of the same make is known again. */
  readonly signature: string;
}

/** Answers that hold for the next table with the same columns too. */
export function isKeptForNext(key: string): boolean {
  return /^(sheet|placeBy|place|numbering|reference|rowColumn|vineColumn|xColumn|yColumn|decimal|dateOrder|compensates|column:|unit:|blockName:)/.test(key);
}

/** Furthest that a point may lie from its vine: the usual error of a phone's or hand-held receiver's position, in metres. */
export const placeReachM = 5;
