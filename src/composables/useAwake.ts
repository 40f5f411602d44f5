import { onBeforeUnmount, onMounted } from 'vue';

/** Keeps the screen on while somebody walks; browsers that cannot simply let it sleep. */
export function useAwake(): void {
  let lock: WakeLockSentinel | null = null;
  const take = async (): Promise<void> => {
    if (document.visibilityState !== 'visible' || !('wakeLock' in navigator)) return;
    // Refused on low battery: the walk goes on all the same.
    lock = await navigator.wakeLock.request('screen').catch(() => null);
  };
  const again = () => void take();
  onMounted(() => {
    document.addEventListener('visibilitychange', again);
    again();
  });
  onBeforeUnmount(() => {
    document.removeEventListener('visibilitychange', again);
    void lock?.release();
  });
}
