import type { NewReading, Refusal } from '../../../shared/contracts/readings.ts';
import { strangeVine } from '../../ground/strangeVine.ts';
import type { BatchContext } from './batchContext.ts';

export const clockToleranceMs = 5 * 60_000;

/** Why a reading cannot be stored, in a sentence and as a code; null when it can. `before`: those of the same batch that come before it. */
export function refusalOf(reading: NewReading, context: BatchContext, before: readonly NewReading[]): Refusal | null {
  if (!context.blocks.has(reading.blockId)) return { code: 'blockElsewhere', reason: 'This block is not in this estate.' };
  const measure = context.measures.get(reading.measureCode);
  if (!measure) return { code: 'noSuchMeasure', reason: `There is no measure "${reading.measureCode}" in this estate.` };
  if (reading.unit !== measure.unit) return { code: 'otherUnit', reason: `"${reading.measureCode}" is kept in ${measure.unit}; convert ${reading.unit} before sending.` };
  if (reading.rowId !== null) {
    const row = context.rows.get(reading.rowId);
    if (!row || row.blockId !== reading.blockId) return { code: 'rowElsewhere', reason: 'This row is not a row of the block.' };
    const strange = reading.ordinal === null ? null : strangeVine(row, reading.ordinal, context);
    if (strange !== null) return strange;
  }
  if (reading.roundId !== null && !context.rounds.has(reading.roundId)) return { code: 'notYourRound', reason: 'This round is not one of yours in this estate.' };
  if (context.ownRoundsOnly && reading.roundId === null) return { code: 'needsRound', reason: 'Crew record within a round that was sent to them.' };
  if (reading.readBy !== null && !context.readers.has(reading.readBy)) return { code: 'readerUnknown', reason: 'Who read this is not somebody of this estate whose readings you may type.' };
  if (reading.bagId !== null && !context.bags.has(reading.bagId)) return { code: 'bagElsewhere', reason: 'This bag is not in this estate.' };
  if (reading.supersedes !== null && !context.known.has(reading.supersedes) && !before.some(({ id }) => id === reading.supersedes)) return { code: 'correctsUnknown', reason: 'The reading that this one corrects is not known here.' };
  if (seasonOf(reading, context) === null) return { code: 'noSeason', reason: `No season of this estate holds ${reading.takenAt.slice(0, 10)}. Check the clock, or make the season first.` };
  return null;
}

/** How far the phone's clock was off when it sent, in milliseconds; 0 where it is not known. */
export function clockOffMs({ deviceTime }: Pick<NewReading, 'deviceTime'>, now: Date): number {
  return deviceTime === null ? 0 : Date.parse(deviceTime) - now.getTime();
}

/** The season of a reading. Where the phone's clock is wrong, a time that no season holds is looked up as the server's clock would have it. */
export function seasonOf(reading: NewReading, context: BatchContext): string | null {
  const off = clockOffMs(reading, context.now);
  return context.seasonOn(reading.takenAt) ?? (Math.abs(off) > clockToleranceMs ? context.seasonOn(new Date(Date.parse(reading.takenAt) - off).toISOString()) : null);
}
