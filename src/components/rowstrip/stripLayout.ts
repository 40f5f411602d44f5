import type { StripChoice, StripRow, StripVine, VineRun } from './rowStripTypes.ts';

/** Where everything of a strip lies in px: one row one bar, placed and as long as in the field, so that the block's outline appears. */

export interface StripMeasure {
  /** px from bar to bar and height of a bar. */
  readonly pitch: number;
  readonly bar: number;
  /** Room for row numbers at the left and posts at both ends. */
  readonly left: number;
  readonly right: number;
  readonly width: number;
}

export interface StripScale {
  readonly originM: number;
  readonly pxPerM: number;
  readonly left: number;
}

export const postPx = 5;
export const stripMeasures = { whole: { pitch: 11, bar: 8.4 }, reading: { pitch: 22, bar: 17 } } as const;
export const numbersPx = 44;

/** The scale that fits the longest reach of all rows into the width. */
export function stripScale(rows: readonly StripRow[], { width, left, right }: Pick<StripMeasure, 'width' | 'left' | 'right'>): StripScale {
  const originM = Math.min(...rows.map((row) => row.startOffsetM));
  const endM = Math.max(...rows.map((row) => row.startOffsetM + row.lengthM));
  const room = Math.max(1, width - left - right - 2 * postPx);
  return { originM, pxPerM: endM > originM ? room / (endM - originM) : 1, left: left + postPx };
}

export function xOfM(alongM: number, scale: StripScale): number {
  return scale.left + (alongM - scale.originM) * scale.pxPerM;
}

export function mOfX(x: number, scale: StripScale): number {
  return scale.originM + (x - scale.left) / scale.pxPerM;
}

/** Metres along the row direction at the middle of a vine's place; vines stand evenly, half a step from both posts. */
export function vineM(row: StripRow, vine: number): number {
  return row.startOffsetM + ((vine - 0.5) * row.lengthM) / Math.max(1, row.vineCount);
}

/** Metres at the edge before a vine (`vineEdgeM(row, 1)` is the row's start). */
export function vineEdgeM(row: StripRow, vine: number): number {
  return row.startOffsetM + ((vine - 1) * row.lengthM) / Math.max(1, row.vineCount);
}

/** Vine whose place holds a position along the row, held to 1…vineCount. */
export function vineAtM(row: StripRow, alongM: number): number {
  const vine = Math.floor(((alongM - row.startOffsetM) / row.lengthM) * row.vineCount) + 1;
  return Math.min(row.vineCount, Math.max(1, vine));
}

export interface ChosenRun extends VineRun {
  readonly rowId: string;
}

/** What a choice means in vines, row by row. Rows that do not reach the chosen part are left out. */
export function chosenRuns(rows: readonly StripRow[], choice: StripChoice): ChosenRun[] {
  return rows
    .filter((row) => choice.rowIds.includes(row.id) && row.vineCount > 0)
    .flatMap((row) => {
      const run = runWithin(row, choice.fromM ?? -Infinity, choice.toM ?? Infinity);
      return run === null ? [] : [{ rowId: row.id, ...run }];
    });
}

/** Vines whose middle lies between two positions; null when there is none. */
function runWithin(row: StripRow, fromM: number, toM: number): VineRun | null {
  const stepM = row.lengthM / row.vineCount;
  const from = Math.max(1, Math.ceil((fromM - row.startOffsetM) / stepM + 0.5 - 1e-9));
  const to = Math.min(row.vineCount, Math.floor((toM - row.startOffsetM) / stepM + 0.5 + 1e-9));
  return from > to ? null : { from, to };
}

export interface ChoiceSum {
  readonly rows: number;
  readonly vines: number;
  readonly missing: number;
}

/** Living vines and gaps of a choice. */
export function sumOfChoice(rows: readonly StripRow[], choice: StripChoice): ChoiceSum {
  const runs = chosenRuns(rows, choice);
  const byId = new Map(rows.map((row) => [row.id, row]));
  const missing = runs.reduce((sum, run) => sum + byId.get(run.rowId)!.missing.filter((vine) => vine >= run.from && vine <= run.to).length, 0);
  const places = runs.reduce((sum, run) => sum + run.to - run.from + 1, 0);
  return { rows: runs.length, vines: places - missing, missing };
}

/** Position of the nearest end post or panel post of a row, for snapping a choice. Panels are counted from the start. */
export function nearestPostM(row: StripRow, alongM: number, vinesPerPanel: number | null): number {
  const panel = vinesPerPanel ?? 1;
  const stepM = row.lengthM / Math.max(1, row.vineCount);
  const panels = Math.round((alongM - row.startOffsetM) / (stepM * panel));
  return Math.min(row.startOffsetM + row.lengthM, Math.max(row.startOffsetM, row.startOffsetM + panels * panel * stepM));
}

/** Number of a post as crews count it: the end post is 1. */
export function postNumber(row: StripRow, alongM: number, vinesPerPanel: number): number {
  const stepM = row.lengthM / Math.max(1, row.vineCount);
  return Math.round((alongM - row.startOffsetM) / (stepM * vinesPerPanel)) + 1;
}

/** Zone of a vine, 0 outside every zone. */
export function zoneOf(row: StripRow, vine: number): number {
  return row.zoneRuns.find((run) => vine >= run.from && vine <= run.to)?.zone ?? 0;
}

/** Row numbers that are written: the first, and each fifth. */
export function isNumbered(row: StripRow, index: number): boolean {
  return index === 0 || Number(row.label) % 5 === 0;
}

export function vineCountOf(rows: readonly StripRow[]): number {
  return rows.reduce((sum, row) => sum + row.vineCount, 0);
}

export function sameVine(one: StripVine | null, other: StripVine | null): boolean {
  return one !== null && other !== null && one.rowId === other.rowId && one.vine === other.vine;
}
