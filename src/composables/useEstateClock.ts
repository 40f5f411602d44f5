import { inject } from 'vue';
import { instantAt, wallClock } from '../../shared/season/wallClock.ts';
import { readerPreferencesKey } from './useFormat.ts';

/**
 * Fields of date and time go by the clock at the estate, wherever they are filled in, as everything that is shown does.
 * `wall` is what such a field holds (yyyy-mm-ddThh:mm), `instant` an ISO time.
 */
export function useEstateClock() {
  const preferences = inject(readerPreferencesKey, null);
  const timeZone = () => preferences?.value.timeZone ?? Intl.DateTimeFormat().resolvedOptions().timeZone;
  return {
    now: () => wallClock(timeZone(), new Date()),
    wall: (instant: string) => wallClock(timeZone(), new Date(instant)),
    instant: (wall: string) => instantAt(timeZone(), wall).toISOString(),
  };
}
