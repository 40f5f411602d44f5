import { groupBy } from '../groupBy.ts';
import type { Asking } from '../lab/file/questions.ts';
import type { EarlierEntry } from './earlierTable.ts';
import { lineList } from './lineList.ts';

/** What makes two readings one: vine, measure, day and value. */
export function readingKey({ rowId, ordinal, measure, day, value }: Pick<EarlierEntry, 'rowId' | 'ordinal' | 'measure' | 'day' | 'value'>): string {
  return `${rowId}|${ordinal}|${measure}|${day}|${Number(value.toFixed(6))}`;
}

/** The same reading on two lines counts once; different values of a vine, measure and day both stay as repeats. */
export function onceEach(entries: readonly EarlierEntry[], asking: Asking): EarlierEntry[] {
  const first = new Map<string, EarlierEntry>();
  const twice: EarlierEntry[] = [];
  for (const entry of entries) {
    const key = readingKey(entry);
    if (first.has(key)) twice.push(entry);
    else first.set(key, entry);
  }
  if (twice.length > 0) asking.say('twice', { count: twice.length, lines: lineList(twice.map(({ line }) => line)) });
  const byVine = groupBy([...first.values()], ({ rowId, ordinal, measure, day }) => `${rowId}|${ordinal}|${measure}|${day}`);
  const several = [...byVine.values()].filter((group) => group.length > 1).flat();
  if (several.length > 0) asking.say('repeats', { count: several.length, lines: lineList(several.map(({ line }) => line)) });
  const repeats = new Set(several);
  return [...first.values()].map((entry) => ({ ...entry, isRepeat: repeats.has(entry) }));
}
