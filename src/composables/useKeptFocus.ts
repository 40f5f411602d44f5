import { nextTick, type Ref } from 'vue';

/**
 * What was pressed may have gone with its act: whoever works by keys goes on beside it, and not from the top of the page.
 * Takes places inside the frame as selectors, the best first; does nothing while something has the focus.
 */
export function useKeptFocus(frame: Readonly<Ref<HTMLElement | null>>): (...places: readonly string[]) => Promise<void> {
  return async (...places) => {
    await nextTick();
    if (document.activeElement !== document.body) return;
    places.map((place) => frame.value?.querySelector<HTMLElement>(place)).find((found) => found)?.focus({ preventScroll: true });
  };
}
