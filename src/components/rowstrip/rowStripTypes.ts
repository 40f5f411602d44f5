import type { ColourSet } from '../../lib/colours.ts';

/** Vines counted from 1 at the end where people begin, the left one, both ends included. */
export interface VineRun {
  readonly from: number;
  readonly to: number;
}

export interface ZoneRun extends VineRun {
  /** Zone number from 1; 0 for vines outside every zone. */
  readonly zone: number;
}

/** One row as the strip draws it. Rows come in the order in which people count them. */
export interface StripRow {
  readonly id: string;
  /** Number painted on the post. */
  readonly label: string;
  /** Where the row begins and how long it is, along the row direction, in metres; this makes the block's outline appear. */
  readonly startOffsetM: number;
  readonly lengthM: number;
  /** Places for vines, living or not. */
  readonly vineCount: number;
  /** Names from the estate's post colours ("red"), or null. */
  readonly startPost: string | null;
  readonly endPost: string | null;
  readonly zoneRuns: readonly ZoneRun[];
  readonly missing: readonly number[];
  readonly replant?: readonly number[];
  readonly offType?: readonly number[];
  /** Vines whose zone is doubtful: hatched over the fill. */
  readonly doubtful?: readonly VineRun[];
  /** Closed to entry: hatched in brick. */
  readonly restricted?: boolean;
}

export interface StripZone {
  readonly zone: number;
  readonly name: string;
}

/** A vine by permanent row and number. */
export interface StripVine {
  readonly rowId: string;
  readonly vine: number;
}

/** A target with its number in the walking order. */
export interface StripTarget extends StripVine {
  readonly order?: number;
  readonly done?: boolean;
}

/** Chosen rows, whole or from a place to a place; metres run along the row direction like startOffsetM. Null means to the post. */
export interface StripChoice {
  readonly rowIds: readonly string[];
  readonly fromM: number | null;
  readonly toM: number | null;
}

export interface StripColours {
  readonly set: ColourSet;
  readonly count: number;
  /** Colours that people gave zones, by zone number. */
  readonly own?: Readonly<Record<number, string>>;
}

/** "whole" 11 px a row, "reading" 22 px. */
export type StripSize = 'whole' | 'reading';
