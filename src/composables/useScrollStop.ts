import { computed, onBeforeUnmount, onMounted, ref, type ComputedRef, type Ref } from 'vue';

/**
 * Attributes of a frame that scrolls: while it holds more than it shows it is a named region with a tab stop of its own, so that arrow keys scroll it
 * (WCAG 2.2, 2.1.1); while all of it shows it is none, since a stop at which keys do nothing is in the way.
 */
export function useScrollStop(frame: Readonly<Ref<HTMLElement | null>>, label: () => string): ComputedRef<Record<string, unknown>> {
  const holdsMore = ref(false);
  const watcher = new ResizeObserver(() => {
    const now = frame.value;
    holdsMore.value = now !== null && (now.scrollWidth > now.clientWidth || now.scrollHeight > now.clientHeight);
  });
  onMounted(() => {
    // What is inside may grow while the frame stays as it is.
    if (frame.value) for (const element of [frame.value, ...frame.value.children]) watcher.observe(element);
  });
  onBeforeUnmount(() => watcher.disconnect());
  return computed(() => (holdsMore.value ? { tabindex: 0, role: 'region', 'aria-label': label() } : {}));
}
