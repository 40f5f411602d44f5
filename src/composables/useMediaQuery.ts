import { onBeforeUnmount, ref, type Ref } from 'vue';

/** True while the window fits a media query. */
export function useMediaQuery(query: string): Ref<boolean> {
  const list = matchMedia(query);
  const fits = ref(list.matches);
  const note = (event: MediaQueryListEvent) => (fits.value = event.matches);
  list.addEventListener('change', note);
  onBeforeUnmount(() => list.removeEventListener('change', note));
  return fits;
}
