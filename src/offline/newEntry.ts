import type { FieldMeasure, FieldRound, WalkStop } from '../../shared/contracts/rounds.ts';
import type { VineState } from '../../shared/contracts/rows.ts';
import type { StopVine } from '../../shared/field/walkState.ts';
import { newId } from '../lib/newId.ts';
import { deviceId } from './deviceId.ts';
import type { Entry, KeptPhoto } from './fieldDatabase.ts';

/** Whose phone it is, and the round that is walked. */
interface Walk {
  readonly estateId: string;
  readonly personId: string;
  readonly round: FieldRound;
}

interface Place {
  readonly stop: WalkStop;
  readonly vine: StopVine;
}

/** `readBy`: a colleague who walks with this phone. */
export interface Typed {
  readonly measure: FieldMeasure;
  readonly text: string;
  readonly value: number;
  readonly isOdd: boolean;
  readonly supersedes: string | null;
  readonly readBy: string | null;
}

export interface Found {
  readonly state: VineState;
  readonly readBy: string | null;
}

/** What every entry has; its id is made here, at the tap, so that it may be sent any number of times. */
function head({ estateId, personId, round }: Walk, { stop, vine }: Place): Pick<Entry, 'id' | 'estateId' | 'personId' | 'roundId' | 'row' | 'vine' | 'place' | 'at' | 'received' | 'outcome'> {
  return { id: newId(), estateId, personId, roundId: round.id, row: vine.rowLabel || stop.rowLabel, vine: vine.vineNumber, ...(vine.place ? { place: vine.place } : {}), at: new Date().toISOString(), received: 0, outcome: null };
}

export function readingEntry(walk: Walk, place: Place, { measure, text, value, isOdd, supersedes, readBy }: Typed): Entry {
  const common = head(walk, place);
  const { stop, vine } = place;
  const flags = [...(isOdd ? (['odd'] as const) : []), ...(vine.isReserve ? (['reserve'] as const) : [])];
  return {
    ...common, kind: 'reading', finding: null,
    reading: {
      id: common.id, blockId: walk.round.blockId, roundId: walk.round.id, targetId: stop.targetId, rowId: vine.rowId, ordinal: vine.ordinal, measureCode: measure.code,
      value, unit: measure.unit, valueTyped: text, takenAt: common.at, deviceId: deviceId(), supersedes, flags, readBy, seenAs: { row: vine.rowLabel, vine: vine.vineNumber },
    },
  };
}

export function findingEntry(walk: Walk, place: Place, { state, readBy }: Found): Entry {
  const common = head(walk, place);
  return { ...common, kind: 'finding', reading: null, finding: { id: common.id, blockId: walk.round.blockId, rowId: place.vine.rowId, ordinal: place.vine.ordinal, state, roundId: walk.round.id, notedAt: common.at, deviceId: deviceId(), readBy } };
}

export function pickEntry(walk: Walk, place: Place): Entry {
  return { ...head(walk, place), kind: 'pick', reading: null, finding: null, pick: { targetId: place.stop.targetId, rowId: place.vine.rowId, ordinal: place.vine.ordinal } };
}

export function photoEntry(walk: Walk, place: Place, { picture, note }: { readonly picture: Blob; readonly note: string }): KeptPhoto {
  const { outcome: _none, ...common } = head(walk, place);
  return { ...common, blockId: walk.round.blockId, rowId: place.vine.rowId, ordinal: place.vine.ordinal, note, picture, received: 0 };
}

/** Whether an entry belongs to a stop: by its target, or by the vine that was found to be something else. */
export function isAtStop(entry: Entry, { targetId, rowId, ordinal, reserve }: WalkStop): boolean {
  const own = entry.reading ?? entry.pick;
  if (own) return targetId === own.targetId;
  return [{ rowId, ordinal }, reserve].some((one) => one?.rowId === entry.finding?.rowId && one?.ordinal === entry.finding?.ordinal);
}
