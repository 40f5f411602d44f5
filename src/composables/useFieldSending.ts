import { onBeforeUnmount, onMounted } from 'vue';

/** Sends when the screen opens, when somebody comes back to it and when the network returns: no background service is needed. */
export function useFieldSending(send: () => Promise<void>): void {
  const attempt = (): void => void (document.visibilityState === 'visible' && send());
  const places: [EventTarget, string][] = [[document, 'visibilitychange'], [window, 'focus'], [window, 'online']];
  onMounted(() => {
    for (const [place, event] of places) place.addEventListener(event, attempt);
    attempt();
  });
  onBeforeUnmount(() => places.forEach(([place, event]) => place.removeEventListener(event, attempt)));
}
