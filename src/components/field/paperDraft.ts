import type { NewReading, ReadingOutcome, VineFinding } from '../../../shared/contracts/readings.ts';
import type { VineState } from '../../../shared/contracts/rows.ts';
import type { FieldMeasure, FieldRound, WalkStop } from '../../../shared/contracts/rounds.ts';
import { isOdd } from '../../../shared/field/valueEntry.ts';
import { askedAt } from '../../../shared/field/walkState.ts';
import { newId } from '../../lib/newId.ts';
import { readNumber } from '../../lib/readNumber.ts';

/** One box of a sheet as it is typed; its id stays, so that saving twice stores once. */
export interface PaperCell {
  id: string;
  text: string;
  outcome: ReadingOutcome | null;
  /** Id of what was saved before it was typed anew. */
  supersedes: string | null;
}

/** One vine of a sheet. `states`: what stands at the target, and at its reserve. */
export interface PaperLine {
  cells: Record<string, PaperCell>;
  states: [VineState | '', VineState | ''];
  findingIds: [string, string];
}

export type PaperDraft = Record<string, PaperLine>;

export function emptyDraft(round: FieldRound): PaperDraft {
  return Object.fromEntries(round.stops.map((stop) => [stop.targetId, {
    cells: Object.fromEntries(askedAt(round, stop).map(({ code }) => [code, { id: newId(), text: '', outcome: null, supersedes: null }])),
    states: ['', ''], findingIds: [newId(), newId()],
  }]));
}

/** The cell after typing: what was saved already is corrected under an id of its own. */
export function retyped(cell: PaperCell, text: string): PaperCell {
  const isSaved = cell.outcome !== null && cell.outcome.state !== 'refused' && cell.outcome.reason === null;
  return isSaved && text !== cell.text ? { id: newId(), text, outcome: null, supersedes: cell.id } : { ...cell, text };
}

/**
 * The draft with what the server answered. A box that was typed anew while the answer was on its way is a correction of
 * what was sent, and waits to be saved itself.
 */
export function withOutcomes(draft: PaperDraft, sent: readonly Pick<NewReading, 'id' | 'valueTyped'>[], outcomes: readonly ReadingOutcome[]): PaperDraft {
  const textSent = new Map(sent.map(({ id, valueTyped }) => [id, valueTyped]));
  const answered = (cell: PaperCell): PaperCell => {
    const outcome = outcomes.find(({ id }) => id === cell.id);
    return outcome ? retyped({ ...cell, text: textSent.get(cell.id) ?? cell.text, outcome }, cell.text) : cell;
  };
  return Object.fromEntries(Object.entries(draft).map(([target, line]) => [target, { ...line, cells: Object.fromEntries(Object.entries(line.cells).map(([code, cell]) => [code, answered(cell)])) }]));
}

/** The vine that a line's values were read on: the target, its reserve, or none. */
export function vineOfLine(stop: WalkStop, { states }: PaperLine): { rowId: string; rowLabel: string; ordinal: number; vineNumber: number; isReserve: boolean } | null {
  if (states[0] === '') return { rowId: stop.rowId, rowLabel: stop.rowLabel, ordinal: stop.ordinal, vineNumber: stop.vineNumber, isReserve: false };
  return stop.reserve === null || states[1] !== '' ? null : { ...stop.reserve, isReserve: true };
}

/** What a box holds: nothing, a value, or why it is none of this measure. */
export function boxValue(text: string, { decimals, minimum }: Pick<FieldMeasure, 'decimals' | 'minimum'>): { value: number | null } | { problem: 'noNumber' | 'negative' | 'notWhole' } {
  const value = readNumber(text);
  if (value === null) return { value };
  if (Number.isNaN(value)) return { problem: 'noNumber' };
  if (value < 0 && minimum >= 0) return { problem: 'negative' };
  return decimals === 0 && !Number.isInteger(value) ? { problem: 'notWhole' } : { value };
}

/** Boxes of which nothing can be saved as they stand. */
export function unreadBoxes(round: FieldRound, draft: PaperDraft): number {
  return round.stops.flatMap((stop) => askedAt(round, stop).filter((measure) => 'problem' in boxValue(draft[stop.targetId]?.cells[measure.code]?.text ?? '', measure))).length;
}

/** Vines of which something is told: a value that can be read, from here or the phone, or what stands there instead. */
export function typedVines(round: FieldRound, draft: PaperDraft): number {
  const isTold = (stop: WalkStop, { cells }: PaperLine) => askedAt(round, stop).some((measure) => {
    const read = boxValue(cells[measure.code]?.text ?? '', measure);
    return ('value' in read && read.value !== null) || fromPhone(round, stop.targetId, measure.code) !== null;
  });
  return round.stops.filter((stop) => draft[stop.targetId] !== undefined && (draft[stop.targetId]!.states[0] !== '' || isTold(stop, draft[stop.targetId]!))).length;
}

/** Value that the phone had sent of a line, when there is one. */
export function fromPhone(round: FieldRound, targetId: string, code: string): number | null {
  return round.received.find((reading) => reading.targetId === targetId && reading.measureCode === code)?.value ?? null;
}

type SentReading = Pick<NewReading, 'id' | 'blockId' | 'roundId' | 'targetId' | 'rowId' | 'ordinal' | 'measureCode' | 'value' | 'unit' | 'valueTyped' | 'takenAt' | 'source' | 'supersedes' | 'flags' | 'readBy' | 'seenAs'>;

/** What of a sheet is to be saved: new boxes and findings; a value that the phone had sent is there already. */
export function paperBatch(round: FieldRound, draft: PaperDraft, sheet: { personId: string; takenAt: string }): { readings: SentReading[]; findings: VineFinding[] } {
  const head = { blockId: round.blockId, roundId: round.id };
  const readings = round.stops.flatMap((stop) => askedAt(round, stop).flatMap((measure): SentReading[] => {
    const line = draft[stop.targetId];
    const cell = line?.cells[measure.code];
    const read = boxValue(cell?.text ?? '', measure);
    const vine = line ? vineOfLine(stop, line) : null;
    if (!cell || !vine || 'problem' in read || read.value === null || (cell.outcome !== null && cell.outcome.state !== 'refused')) return [];
    const { value } = read;
    const flags = [...(isOdd(value, measure) ? (['odd'] as const) : []), ...(vine.isReserve ? (['reserve'] as const) : [])];
    return [{
      id: cell.id, ...head, targetId: stop.targetId, rowId: vine.rowId, ordinal: vine.ordinal, measureCode: measure.code, value, unit: measure.unit, valueTyped: cell.text, takenAt: sheet.takenAt,
      source: 'paper', supersedes: cell.supersedes, flags, readBy: sheet.personId, seenAs: { row: vine.rowLabel, vine: vine.vineNumber },
    }];
  }));
  const findings = round.stops.flatMap((stop) => {
    const line = draft[stop.targetId];
    const places = [stop, stop.reserve] as const;
    return (line?.states ?? []).flatMap((state, at): VineFinding[] => {
      const place = places[at];
      return state === '' || !line || !place ? [] : [{ id: line.findingIds[at]!, ...head, rowId: place.rowId, ordinal: place.ordinal, state, notedAt: sheet.takenAt, deviceId: null, readBy: sheet.personId }];
    });
  });
  return { readings, findings };
}
