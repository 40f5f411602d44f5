import { createPinia } from 'pinia';
import PrimeVue from 'primevue/config';
import { createApp } from 'vue';
import type { Session } from '../shared/contracts/session.ts';
import App from './App.vue';
import { startTheme, useTheme } from './composables/useTheme.ts';
import { watchForUpdate } from './lib/appUpdate.ts';
import { whenContacted, whenSignedOut } from './lib/http.ts';
import { deviceLanguage, i18n, showLanguage } from './lib/i18n.ts';
import { readStored } from './lib/deviceStore.ts';
import type { Language } from './lib/format.ts';
import { primeVueOptions } from './lib/theme.ts';
import { orNothing } from './offline/fieldDatabase.ts';
import { totalWaiting } from './offline/waiting.ts';
import { createAppRouter } from './router/index.ts';
import { views } from './router/views.ts';
import { useContactStore } from './stores/contact.ts';
import { useNoticesStore } from './stores/notices.ts';
import { useSessionStore } from './stores/session.ts';
import './assets/fonts.css';
import './assets/tokens.css';
import './assets/base.css';
import './assets/forms.css';
import './assets/page.css';

async function start(): Promise<void> {
  startTheme();
  const app = createApp(App);
  app.use(createPinia()).use(i18n).use(PrimeVue, primeVueOptions);
  const [session, contact] = [useSessionStore(), useContactStore()];
  whenContacted((reached, serverTime) => contact.note(reached, new Date(), serverTime));

  // On a slow line everything that is surely needed comes at once; a wrong guess of the language costs no time.
  const texts = showLanguage(readStored<Session>('session')?.person?.language ?? readStored<Language>('language') ?? deviceLanguage());
  if (location.pathname.endsWith('/field')) void views.fieldWork?.().catch(() => undefined);
  else if (!location.pathname.includes('/field/')) void import('./components/frame/OfficeShell.vue').catch(() => undefined);

  const { answered } = await begin(session);
  if (session.person) useTheme().choose(session.person.theme);
  await texts;
  if (session.person) await showLanguage(session.person.language);

  const router = createAppRouter(session);
  whenSignedOut((untaken) => {
    if (session.person === null) return;
    session.forget();
    const { fullPath, meta } = router.currentRoute.value;
    // What the field's screens send waits on the phone until it is taken.
    void router.push({ name: 'signIn', query: { to: fullPath, ...(untaken && meta.frame !== 'field' ? { untaken: '1' } : {}) } });
  });
  app.use(router);
  await router.isReady().catch(() => undefined);
  app.mount('#app');
  void answered.then(() => {
    const place = router.currentRoute.value;
    // Signed out meanwhile, from another device or by time: the walk stays on the phone, and the door opens.
    if (session.person === null && place.meta.frame === 'field') void router.push({ name: 'signIn', query: { to: place.fullPath } });
  });

  watchForUpdate((load) => {
    // A new program takes over only an empty outbox: what waits was written by the old one, and goes with it.
    const loadWhenSent = async (): Promise<void> => {
      const waiting = session.person ? await orNothing(totalWaiting(session.person.id), 0) : 0;
      if (waiting === 0) return load();
      useNoticesStore().say(i18n.global.t('field.updateWaits', { n: waiting }, waiting), { kind: 'stop' });
      offer();
    };
    // Pressed too early it stands there still for later.
    const offer = (): number => useNoticesStore().say(i18n.global.t('frame.newVersion'), { kind: 'news', stays: true, act: { label: i18n.global.t('frame.loadNewVersion'), run: () => void loadWhenSent() } });
    offer();
  });
}

/**
 * Asks who is signed in. Without an answer the door still opens and says so. In the field nobody waits for the answer:
 * with one bar of signal it may take minutes, and the day's work is on the phone. Resolves once there is somebody to
 * begin with; `answered` when the server has spoken.
 */
async function begin(session: ReturnType<typeof useSessionStore>): Promise<{ answered: Promise<void> }> {
  const answered = session.load().catch(() => session.recall());
  const kept = readStored<Session>('session');
  const isField = /^\/e\/[^/]+\/field(\/|$)/.test(location.pathname) || (location.pathname === '/' && kept?.estates.every(({ roles }) => roles.every((role) => role === 'crew')) === true);
  if (isField && kept) session.recall();
  else await answered;
  return { answered };
}

void start();
