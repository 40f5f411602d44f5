import type { LabResult } from '../../../shared/contracts/lab.ts';
import { entryValues } from '../../../shared/lab/entryText.ts';
import { labUnit, unitsOf } from '../../../shared/lab/units.ts';

/** What a person has typed into a cell and not stored yet. The ids are made once, so that storing again doubles nothing. */
export interface DraftCell {
  readonly text: string;
  readonly ids: readonly string[];
  /** Ids of the figures that stood in the cell when it was typed. */
  readonly seen?: readonly string[];
}

/** How a measure is measured today. */
export interface MeasureSetup {
  readonly unit: string | null;
  readonly instrument: string;
  readonly method: string;
}

export const noSetup: MeasureSetup = { unit: null, instrument: '', method: '' };

export interface CellPlace {
  readonly code: string;
  readonly measure: string;
}

export const cellKey = ({ code, measure }: CellPlace): string => `${code} ${measure}`;

/** A stored figure as a cell shows it: as it was typed. */
export function storedText(results: readonly LabResult[]): string {
  return results.map(({ typed, value }) => typed ?? String(value)).join(' / ');
}

export type CellTrouble = 'unreadable' | 'thousands' | 'fewer' | 'unit' | 'meanwhile';

export interface NewFigure {
  readonly id: string;
  readonly code: string;
  readonly measureCode: string;
  readonly typed: string;
  readonly unit: string | null;
  readonly instrument: string;
  readonly method: string;
  readonly supersedes: string | null;
  readonly seen: readonly string[] | null;
  readonly reason: string;
}

interface CellInput {
  readonly place: CellPlace;
  readonly draft: DraftCell;
  readonly stored: readonly LabResult[];
  readonly setup: MeasureSetup;
  readonly reason: string;
}

/**
 * The figures that a cell adds or corrects; none where somebody else stored one there since it was typed. What stands there as before is left alone; a figure cannot be deleted, only
 * left out with a reason among the results.
 */
export function figuresOf({ place, draft, stored, setup, reason }: CellInput): { figures: NewFigure[]; needsReason: boolean } | { trouble: CellTrouble; at: string } {
  const entry = entryValues(draft.text);
  const meanwhile = draft.seen === undefined ? [] : stored.filter(({ id }) => !draft.seen!.includes(id));
  if (meanwhile.length > 0) return { trouble: 'meanwhile', at: storedText(meanwhile) };
  if ('problem' in entry) return { trouble: entry.problem, at: entry.at };
  if (entry.values.length < stored.length) return { trouble: 'fewer', at: storedText(stored) };
  const shown = unitsOf(place.measure).find(({ id }) => id === setup.unit)?.shown ?? null;
  const changed = entry.values.flatMap((value, at) => {
    const before = stored[at] ?? null;
    if (before !== null && (before.typed ?? String(before.value)) === value.typed && (shown === null || before.unitTyped === null || before.unitTyped === shown)) return [];
    return [{ value, before, id: draft.ids[at] ?? '' }];
  });
  const impossible = changed.find(({ value }) => setup.unit !== null && Number.isNaN(labUnit(setup.unit)?.convert(value.value) ?? 0));
  if (impossible) return { trouble: 'unit', at: impossible.value.typed };
  const figures = changed.map(({ value, before, id }) => ({ id, code: place.code, measureCode: place.measure, typed: value.typed, unit: setup.unit, instrument: setup.instrument, method: setup.method, supersedes: before?.id ?? null, seen: draft.seen ?? null, reason }));
  return { figures, needsReason: changed.some(({ before }) => before !== null && before.state !== 'provisional') };
}

/** How many ids a cell needs: one a figure, one at least. */
export function idsNeeded(text: string): number {
  const entry = entryValues(text);
  return 'values' in entry ? Math.max(1, entry.values.length) : 1;
}

/** A block of a spreadsheet as it is pasted: rows of cells. */
export function pastedBlock(text: string): string[][] {
  return text.replace(/\r\n?/g, '\n').replace(/\n$/, '').split('\n').map((line) => line.split('\t').map((cell) => cell.trim()));
}
