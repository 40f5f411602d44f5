import type { Router } from 'vue-router';
import type { RouteName } from '../router/routeNames.ts';
import type { useSessionStore } from '../stores/session.ts';

type SessionStore = ReturnType<typeof useSessionStore>;

/** Where a person starts: crew in the field, everybody else with what needs them today. */
export function firstPlace(session: SessionStore, router: Router): { name: RouteName; params?: Record<string, string> } {
  const wanted: RouteName[] = session.isCrewOnly ? ['fieldWork', 'today'] : ['today', 'estate', 'fieldWork'];
  const name = wanted.find((one) => router.hasRoute(one));
  return name && session.estate ? { name, params: { estateId: session.estate.id } } : { name: 'home' };
}
