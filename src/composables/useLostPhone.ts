import { watch } from 'vue';
import { useRouter } from 'vue-router';
import { writeStored } from '../lib/deviceStore.ts';
import { HttpProblem } from '../lib/httpProblem.ts';
import { useFieldStore } from '../stores/field.ts';
import { useSessionStore } from '../stores/session.ts';

/** Signs a phone out that was reported lost and is empty now, on whatever screen of the field it stands, and says why at the door. */
export function useLostPhone(): void {
  const [field, session, router] = [useFieldStore(), useSessionStore(), useRouter()];
  watch(() => field.emptied, async (kept) => {
    if (kept === null) return;
    // The crew's names are not for whoever finds the phone.
    writeStored('crewCode', null);
    try {
      await session.signOut();
    } catch (error) {
      if (!(error instanceof HttpProblem)) throw error;
      session.forget();
    }
    // A fresh page, so that nothing of the day stays in memory either.
    window.location.assign(router.resolve({ name: 'signIn', query: kept > 0 ? { lost: '1', kept: String(kept) } : { lost: '1' } }).href);
  }, { immediate: true });
}
