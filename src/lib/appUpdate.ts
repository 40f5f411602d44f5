import { registerSW } from 'virtual:pwa-register';

/** Keeps the shell on the phone and tells when a newer one waits; it takes over only when somebody says so. */
export function watchForUpdate(onNewer: (load: () => void) => void): void {
  if (import.meta.env.DEV) return;
  const load = registerSW({ onNeedRefresh: () => onNewer(() => void load(true)) });
}
