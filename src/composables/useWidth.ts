import { onBeforeUnmount, onMounted, ref, type Ref } from 'vue';

/** Width of an element in px, followed while it is shown; 0 before the first look. */
export function useWidth(element: Readonly<Ref<HTMLElement | null>>): Ref<number> {
  const width = ref(0);
  const watcher = new ResizeObserver(([entry]) => (width.value = entry?.contentRect.width ?? 0));
  onMounted(() => element.value && watcher.observe(element.value));
  onBeforeUnmount(() => watcher.disconnect());
  return width;
}
