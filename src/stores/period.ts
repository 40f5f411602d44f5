import { defineStore } from 'pinia';
import { ref } from 'vue';

/** Part of the season that the season line holds; every list that can, shows only these days. Null shows the whole season. */
export interface Period {
  readonly phase: string;
  readonly startsOn: string;
  readonly endsOn: string;
}

export const usePeriodStore = defineStore('period', () => {
  const period = ref<Period | null>(null);

  /** True when a day (ISO date) lies in the chosen part, or nothing is chosen. */
  function holds(day: string): boolean {
    return period.value === null || (day.slice(0, 10) >= period.value.startsOn && day.slice(0, 10) <= period.value.endsOn);
  }

  return { period, holds };
});
