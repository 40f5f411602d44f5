import { computed, ref, type Ref } from 'vue';
import type { FieldMeasure, FieldRound, WalkStop } from '../../shared/contracts/rounds.ts';
import type { VineState } from '../../shared/contracts/rows.ts';
import { afterKey, isOdd, valueOf, type Key } from '../../shared/field/valueEntry.ts';
import type { StopVine } from '../../shared/field/walkState.ts';
import { smallPicture } from '../lib/smallPicture.ts';
import { isStoreFailure, type Entry } from '../offline/fieldDatabase.ts';
import { isAtStop } from '../offline/newEntry.ts';
import { useFieldStore } from '../stores/field.ts';
import { useFieldBagsStore } from '../stores/fieldBags.ts';
import { useFeedback } from './useFeedback.ts';

/** Where the walk stands: what `useWalkPlace` tells of it. */
interface Here {
  readonly round: Readonly<Ref<FieldRound | null>>;
  readonly stop: Readonly<Ref<WalkStop | null>>;
  readonly vine: Readonly<Ref<StopVine | null>>;
  readonly measure: Readonly<Ref<FieldMeasure | null>>;
  readonly openIndex: Readonly<Ref<number | null>>;
  readonly lastEntry: Readonly<Ref<Entry | null>>;
}

/** What the acts move: the place from which the next open vine is sought, and the entry that is being corrected. */
interface Moved {
  readonly at: Ref<number>;
  readonly correcting: Ref<Entry | null>;
  /** Who reads, where that is not oneself. */
  readonly readBy: Readonly<Ref<string | null>>;
}

/** What a person does at a vine: type a value, say that it is not the vine, pick fruit, take a photo, take the last entry back. */
export function useWalkActs({ round, stop, vine, measure, openIndex, lastEntry }: Here, { at, correcting, readBy }: Moved) {
  const [field, bags, feedback] = [useFieldStore(), useFieldBagsStore(), useFeedback()];
  const text = ref('');
  const mode = ref<'keys' | 'tally' | 'reasons' | 'odd' | 'photo' | 'plan'>('keys');
  const photoProblem = ref<'unreadable' | 'notKept' | null>(null);
  const isInClosedBag = ref(false);
  const isBusy = ref(false);
  /** What the phone's store would not do, until something goes well again. */
  const trouble = ref<'notKept' | 'notTakenBack' | 'notClosed' | null>(null);
  const isTypingLab = ref(false);

  function press(key: Key): void {
    if (measure.value) text.value = afterKey(text.value, key, measure.value.decimals);
  }
  const count = computed(() => valueOf(text.value) ?? 0);

  /** Everything a tap decides is decided at the tap; writing follows, and the next taps are about the next vine already. */
  async function save(isOddKept = false): Promise<void> {
    const value = valueOf(text.value);
    if (!stop.value || !vine.value || !measure.value || value === null) return;
    if (!isOddKept && isOdd(value, measure.value)) {
      feedback.asks();
      mode.value = 'odd';
      return;
    }
    const [typed, corrected, index] = [text.value, correcting.value, round.value!.stops.indexOf(stop.value)];
    const kept = field.record(stop.value, vine.value, { measure: measure.value, text: typed, value, isOdd: isOddKept, supersedes: corrected?.id ?? null, readBy: readBy.value });
    if (openIndex.value !== null) at.value = openIndex.value;
    [text.value, mode.value, correcting.value, isTypingLab.value] = ['', mode.value === 'tally' ? 'tally' : 'keys', null, false];
    if (!(await isKept(kept, index))) [text.value, correcting.value] = [typed, corrected];
  }

  async function notThis(state: VineState): Promise<void> {
    if (!stop.value || !vine.value) return;
    const index = round.value!.stops.indexOf(stop.value);
    const kept = field.find(stop.value, vine.value, { state, readBy: readBy.value });
    [text.value, mode.value] = ['', 'keys'];
    await isKept(kept, index);
  }

  /** One tap at a time: a second one by accident would put the next vine into the bag. */
  async function pick(): Promise<void> {
    if (!stop.value || !vine.value || isBusy.value) return;
    isBusy.value = true;
    const index = round.value!.stops.indexOf(stop.value);
    const kept = field.pick(stop.value, vine.value);
    if (openIndex.value !== null) at.value = openIndex.value;
    await isKept(kept, index);
    isBusy.value = false;
  }

  /** Says by sound, buzz and words whether the phone's store took it. If not, the walk stands at its vine again. */
  async function isKept(writing: Promise<void>, index: number): Promise<boolean> {
    try {
      await writing;
      trouble.value = null;
      feedback.kept();
      return true;
    } catch {
      // No room, or the browser took the store away. Whatever the reason, the person must know before the next vine.
      [trouble.value, at.value, mode.value] = ['notKept', index, 'keys'];
      feedback.asks();
      return false;
    }
  }

  async function photograph(file: File, note: string): Promise<void> {
    if (!stop.value || !vine.value) return;
    photoProblem.value = null;
    const [at, what] = [stop.value, vine.value];
    // A file that the browser cannot read as a picture, or no room for it: each is said, and the walk goes on.
    const picture = await smallPicture(file).catch(() => null);
    if (picture === null) return void (photoProblem.value = 'unreadable');
    const isThere = await field.photograph(at, what, { picture, note }).then(() => true, () => false);
    if (!isThere) return void (photoProblem.value = 'notKept');
    feedback.kept();
    mode.value = 'keys';
  }

  /** Takes the last entry back; what the server has already is corrected instead, and both stay on record. */
  async function undo(): Promise<void> {
    const entry = lastEntry.value;
    if (!entry || isBusy.value) return;
    isInClosedBag.value = entry.kind === 'pick' && bags.bags.some(({ bag }) => bag.vines.some(({ rowId, ordinal }) => rowId === entry.pick?.rowId && ordinal === entry.pick.ordinal));
    if (isInClosedBag.value) return feedback.asks();
    isBusy.value = true;
    const index = round.value?.stops.findIndex((one) => isAtStop(entry, one)) ?? -1;
    try {
      if (await field.undo(entry)) at.value = Math.max(0, index);
      else if (entry.kind === 'reading') correcting.value = entry;
      [text.value, mode.value, trouble.value] = [entry.reading?.valueTyped ?? '', 'keys', null];
    } catch (error) {
      if (!isStoreFailure(error)) throw error;
      trouble.value = 'notTakenBack';
      feedback.asks();
    } finally {
      isBusy.value = false;
    }
  }

  /** Answers whether the phone has noted that the round is closed. */
  async function close(): Promise<boolean> {
    const isNoted = await field.closeRound(round.value!.id);
    trouble.value = isNoted ? null : 'notClosed';
    if (!isNoted) feedback.asks();
    return isNoted;
  }

  return { text, mode, count, photoProblem, isInClosedBag, trouble, isTypingLab, press, save, notThis, pick, photograph, undo, close };
}
