import { useRouter } from 'vue-router';
import { routePlaces, type RouteName, type RoutePlace } from '../router/routeNames.ts';
import { useSessionStore } from '../stores/session.ts';

/** Whether a place has a view and the person the right to see it; the server checks again. */
export function useMayOpen(): (name: RouteName) => boolean {
  const [session, router] = [useSessionStore(), useRouter()];
  const places: Readonly<Record<RouteName, Omit<RoutePlace, 'under'>>> = routePlaces;
  return (name) => {
    const { needs } = places[name];
    return router.hasRoute(name) && (needs === undefined || session.can(...needs));
  };
}
