import { readFigure } from './figure.ts';

export interface EntryValue {
  readonly value: number;
  readonly below: boolean;
  readonly typed: string;
}

export type Entry = { readonly values: readonly EntryValue[] } | { readonly problem: 'unreadable' | 'thousands'; readonly at: string };

/**
 * What a person typed into one cell of the grid: a figure with point or comma, "<0.1" for below detection, and repeats
 * divided by a stroke, a semicolon or a blank. `entryValues('23,4 / 23.6')` has two values. Thousands are not typed here.
 */
export function entryValues(text: string): Entry {
  const parts = text.replace(/([<≤])\s+/g, '$1').split(/[/;|\s]+/).filter((part) => part !== '');
  const values: EntryValue[] = [];
  for (const typed of parts) {
    // A person who types a comma between figures means decimals: thousands do not occur in these measures.
    const figure = readFigure(typed, typed.includes(',') ? ',' : '.');
    if (figure.kind !== 'number' || figure.unit !== '') return { problem: 'unreadable', at: typed };
    if ((typed.match(/[.,]/g) ?? []).length > 1) return { problem: 'thousands', at: typed };
    values.push({ value: figure.value, below: figure.below, typed });
  }
  return { values };
}
