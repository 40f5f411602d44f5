import { computed, type ComputedRef, type Ref } from 'vue';
import type { FieldMeasure, FieldRound, WalkStop } from '../../../shared/contracts/rounds.ts';
import { standingOf, type ZoneStanding } from '../../../shared/field/enoughHere.ts';
import { isOthersStop, isStopDone, nextOpenStop, openAt, vineAt, type StopVine } from '../../../shared/field/walkState.ts';
import type { Entry } from '../../offline/fieldDatabase.ts';
import { walkEntries } from './walkEntries.ts';

export interface WalkPlace {
  /** Index of the next open stop; null when the walk is done. */
  openIndex: ComputedRef<number | null>;
  stop: ComputedRef<WalkStop | null>;
  vine: ComputedRef<StopVine | null>;
  previous: ComputedRef<StopVine | null>;
  measure: ComputedRef<FieldMeasure | null>;
  done: ComputedRef<number>;
  /** Targets at which nothing is left to read. */
  read: ComputedRef<ReadonlySet<string>>;
  /** How far the zone is, with what was read here and what the server had. */
  standing: ComputedRef<ZoneStanding | null>;
}

/** Where one is on a walk: what is to be read next, or what is being corrected. `from`: the index from which one goes on. */
export function useWalkPlace(round: Ref<FieldRound | null>, entries: () => readonly Entry[], { from, correcting }: { from: Ref<number>; correcting: Ref<Entry | null> }): WalkPlace {
  const typed = computed(() => walkEntries(entries()));
  const openIndex = computed(() => (round.value ? nextOpenStop(round.value, typed.value, from.value) : null));
  const stop = computed(() => {
    const corrected = correcting.value?.reading?.targetId;
    if (!round.value) return null;
    if (corrected) return round.value.stops.find(({ targetId }) => targetId === corrected) ?? null;
    return openIndex.value === null ? null : round.value.stops[openIndex.value]!;
  });
  const previous = computed(() => {
    const before = round.value && stop.value ? round.value.stops[round.value.stops.indexOf(stop.value) - 1] : undefined;
    return before && !isOthersStop(round.value!, before, typed.value) ? vineAt(before, typed.value) : null;
  });
  const vine = computed(() => (stop.value ? vineAt(stop.value, typed.value) : null));
  const measure = computed(() => {
    if (!round.value || !stop.value) return null;
    const code = correcting.value?.reading?.measureCode;
    return code ? (round.value.measures.find((one) => one.code === code) ?? null) : (openAt(round.value, stop.value, typed.value)[0] ?? null);
  });
  const read = computed(() => new Set(round.value?.stops.filter((one) => isStopDone(round.value!, one, typed.value)).map(({ targetId }) => targetId)));
  const done = computed(() => read.value.size);
  const standing = computed(() => {
    if (!round.value || !stop.value || !measure.value) return null;
    const received = round.value.received.flatMap(({ targetId, measureCode, value }) => (targetId === null ? [] : [{ targetId, measureCode, value }]));
    const here = entries().flatMap(({ reading }) => (reading?.targetId ? [{ targetId: reading.targetId, measureCode: reading.measureCode, value: reading.value }] : []));
    return standingOf(round.value, measure.value, stop.value.zone, [...received, ...here]);
  });
  return { openIndex, stop, vine, previous, measure, done, read, standing };
}
