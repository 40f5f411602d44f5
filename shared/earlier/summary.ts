import type { EarlierSummary } from '../contracts/earlier.ts';
import { groupBy } from '../groupBy.ts';
import type { SeasonSpan } from '../season/seasonAround.ts';
import type { EarlierBlock, EarlierEntry, UnderstoodEarlier } from './earlierTable.ts';

const shownExamples = 8;

export interface SummaryFacts {
  readonly blocks: readonly Pick<EarlierBlock, 'id' | 'name'>[];
  readonly seasons: readonly SeasonSpan[];
  /** Seasons that would be made. */
  readonly newSeasons: readonly SeasonSpan[];
  readonly known: number;
}

/** What would be stored of a table, counted by block, measure and season; means and ranges in the measures' own units. */
export function summariseEarlier(understood: Pick<UnderstoodEarlier, 'lines' | 'refused'>, entries: readonly EarlierEntry[], facts: SummaryFacts): EarlierSummary {
  const nameOf = new Map(facts.blocks.map(({ id, name }) => [id, name]));
  const days = [...new Set(entries.map(({ day }) => day))].sort();
  const inOrder = [...entries].sort((a, b) => a.line - b.line);
  const step = Math.max(1, Math.floor(entries.length / shownExamples));
  const held = (span: SeasonSpan) => entries.filter(({ day }) => span.startsOn <= day && day <= span.endsOn).length;
  return {
    lines: understood.lines,
    readings: entries.length,
    known: facts.known,
    blocks: [...groupBy(entries, ({ blockId }) => blockId)].map(([id, own]) => ({ id, name: nameOf.get(id) ?? '', vines: new Set(own.map(({ rowId, ordinal }) => `${rowId}|${ordinal}`)).size, readings: own.length })),
    days: days.length === 0 ? null : { count: days.length, first: days[0]!, last: days.at(-1)! },
    measures: [...groupBy(entries, ({ measure }) => measure)].map(([code, own]) => {
      const values = own.map(({ value }) => value);
      return { code, count: own.length, mean: values.reduce((sum, value) => sum + value, 0) / values.length, least: values.reduce((a, b) => Math.min(a, b)), most: values.reduce((a, b) => Math.max(a, b)), odd: own.filter(({ odd }) => odd).length };
    }),
    seasons: [...facts.seasons.map((span) => ({ span, isNew: false })), ...facts.newSeasons.map((span) => ({ span, isNew: true }))]
      .sort((a, b) => a.span.startsOn.localeCompare(b.span.startsOn))
      .map(({ span, isNew }) => ({ name: span.name, isNew, readings: held(span) }))
      .filter(({ readings }) => readings > 0),
    refusedLines: new Set(understood.refused.map(({ line }) => line)).size,
    examples: inOrder.filter((_entry, at) => at % step === 0).slice(0, shownExamples).map(({ line, blockId, rowLabel, vineNumber, place, metres, day, measure, value, typed, unitTyped, odd }) => ({ line, blockName: nameOf.get(blockId) ?? '', rowLabel, vineNumber, ...(place ? { place: [...place] as [number, number] } : {}), metres, day, measure, value, typed, unitTyped, odd })),
  };
}
