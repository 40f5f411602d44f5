import { createRouter, createWebHistory, type RouteLocationNormalized, type RouteRecordRaw, type Router } from 'vue-router';
import type { Permission, Reach } from '../../shared/catalog/permissions.ts';
import type { useSessionStore } from '../stores/session.ts';
import { loadOfficeTexts } from '../lib/i18n.ts';
import { firstPlace } from '../composables/firstPlace.ts';
import { announceArrivals } from './arrival.ts';
import { routePlaces, type Frame, type RouteName } from './routeNames.ts';
import { views } from './views.ts';

declare module 'vue-router' {
  interface RouteMeta {
    frame: Frame;
    needs?: readonly [Permission, Reach];
    under?: RouteName;
  }
}

/** Doors that stand open to somebody who is not signed in. */
const openToAll: ReadonlySet<RouteName> = new Set(['signIn', 'crewDoor', 'join', 'forgotten', 'reset', 'noticeState', 'notFound']);

type SessionStore = ReturnType<typeof useSessionStore>;

function records(): RouteRecordRaw[] {
  return (Object.keys(routePlaces) as RouteName[]).flatMap((name) => {
    const view = views[name];
    const { path, frame, ...rest }: { path: string; frame: Frame; needs?: readonly [Permission, Reach]; under?: string } = routePlaces[name];
    return view ? [{ name, path, component: view, props: true, meta: { frame, ...rest } as RouteRecordRaw['meta'] & { frame: Frame } }] : [];
  });
}

/**
 * The router, with the guard that asks for sign-in, keeps the estate in step and turns people away from what they may not see.
 * `leave` loads an address as a fresh page.
 */
export function createAppRouter(session: SessionStore, leave: (address: string) => void = (address) => window.location.assign(address)): Router {
  // What one person saw of one estate stays in memory as long as the page does: the next begins with a fresh page, so that nobody is shown, even for a moment, what was another's.
  let seen: string | null = null;
  const router = createRouter({ history: createWebHistory(), routes: records(), scrollBehavior: (to, from, saved) => saved ?? (to.name === from.name ? false : { top: 0 }) });
  router.beforeEach(async (to) => {
    const answer = guard(to, session, router);
    if (answer === true && typeof to.params.estateId === 'string') {
      const here = `${session.person?.id} ${to.params.estateId}`;
      if (seen !== null && seen !== here) {
        leave(router.resolve(to).href);
        return false;
      }
      seen = here;
    }
    // The page behind a notice's code stands at the door and speaks of picking.
    if (answer === true && (to.meta.frame === 'office' || to.name === 'noticeState')) await loadOfficeTexts();
    return answer;
  });
  announceArrivals(router);
  return router;
}

function guard(to: RouteLocationNormalized, session: SessionStore, router: Router) {
  if (openToAll.has(to.name as RouteName)) return true;
  if (session.person === null) return { name: 'signIn', query: to.fullPath === '/' ? {} : { to: to.fullPath } };
  const estateId = to.params.estateId;
  if (typeof estateId === 'string') {
    if (!session.estates.some(({ id }) => id === estateId)) return { name: 'notFound', params: { rest: to.path.slice(1).split('/') } };
    if (session.estate?.id !== estateId) session.chooseEstate(estateId);
  }
  const needs = to.meta.needs;
  return needs && !session.can(...needs) ? firstPlace(session, router) : true;
}
