import { onBeforeUnmount, ref, type Ref } from 'vue';

const tickMs = 20_000;

/** The time, looked at three times a minute: what begins or ends while a screen is open shows by itself. */
export function useNow(): Ref<Date> {
  const now = ref(new Date());
  const timer = setInterval(() => (now.value = new Date()), tickMs);
  onBeforeUnmount(() => clearInterval(timer));
  return now;
}
