import { defineStore } from 'pinia';
import { computed, ref } from 'vue';
import { readStored, writeStored } from '../lib/deviceStore.ts';

/** A clock that is off by no more is let pass. */
const clockToleranceMs = 5 * 60_000;

/** Whether the server answers, and when it last did. Screens say so in words; they never guess. */
export const useContactStore = defineStore('contact', () => {
  const isReached = ref(true);
  /** Also of a time before this page was opened: without signal it is what tells how old everything is. */
  const lastContactAt = ref<string | null>(readStored<string>('lastContact'));
  /** This device's clock less the server's, in milliseconds, when they last met; also after a restart without signal. */
  const clockOffMs = ref(readStored<number>('clockOff') ?? 0);
  /** Minutes by which the clock is off, when it is more than what is let pass. */
  const clockOffMin = computed(() => (Math.abs(clockOffMs.value) > clockToleranceMs ? Math.round(clockOffMs.value / 60_000) : null));

  function note(reached: boolean, now: Date, serverTime: Date | null = null): void {
    isReached.value = reached;
    if (!reached) return;
    lastContactAt.value = now.toISOString();
    writeStored('lastContact', lastContactAt.value);
    if (serverTime === null) return;
    clockOffMs.value = now.getTime() - serverTime.getTime();
    writeStored('clockOff', clockOffMs.value);
  }

  return { isReached, lastContactAt, clockOffMs, clockOffMin, note };
});
