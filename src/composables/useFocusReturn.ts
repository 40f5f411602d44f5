import { nextTick, watch, type Ref } from 'vue';

/** Remembers what had the focus when something opened over the page, and gives it back when that closes. */
export function useFocusReturn(isOpen: Ref<boolean>): void {
  let before: HTMLElement | null = null;
  watch(isOpen, async (open) => {
    if (open) {
      before = document.activeElement instanceof HTMLElement && document.activeElement !== document.body ? document.activeElement : null;
      return;
    }
    await nextTick();
    // What was acted on may be gone with the act; then the screen's heading is the place to go on from.
    const to = before?.isConnected ? before : document.querySelector<HTMLElement>('main h1');
    if (to?.tagName === 'H1') to.tabIndex = -1;
    to?.focus({ preventScroll: true });
  }, { flush: 'sync' });
}
