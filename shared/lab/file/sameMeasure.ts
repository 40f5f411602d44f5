import { groupBy } from '../../groupBy.ts';
import type { LooseValue } from './columns.ts';
import type { Asking } from './questions.ts';

/**
 * One measure in several columns of a line: two readings of the bag, or one reading in two units, which would count twice.
 * Asked once a measure; while it is open nothing of the measure is read.
 */
export function settleColumns(values: readonly LooseValue[], asking: Asking): LooseValue[] {
  let kept = [...values];
  for (const [measure, own] of groupBy(values, (value) => value.measure)) {
    const nameOf = namesOf(own);
    const titles = [...new Set(own.map(nameOf))];
    const isBeside = [...groupBy(own, ({ line }) => line).values()].some((line) => new Set(line.map(({ column }) => column)).size > 1);
    if (!isBeside || titles.length < 2) continue;
    const answer = asking.ask(`columns:${measure}`, { code: 'columns', params: { measure, titles: titles.join(' | ') }, choices: ['repeats', ...titles.map((title) => ({ value: title, label: title }))] });
    if (answer === 'repeats') continue;
    kept = kept.filter((value) => value.measure !== measure || nameOf(value) === answer);
  }
  return kept;
}

/** Titles of columns; where two columns have the same title, with the column as a spreadsheet numbers it. */
function namesOf(values: readonly LooseValue[]): (value: LooseValue) => string {
  const columns = groupBy(values, ({ title }) => title);
  return ({ title, column }) => (new Set(columns.get(title)!.map((value) => value.column)).size > 1 ? `${title} #${column + 1}` : title);
}
