import { nextTick } from 'vue';
import type { Router } from 'vue-router';

const waitMs = 1500;
const stepMs = 50;

/**
 * Tells keyboard and screen reader that another screen is there: after a change of place the focus stands on the new
 * heading, and the window is named after it. Focus that the new screen set itself is left alone, and so is the first page.
 */
export function announceArrivals(router: Router): void {
  router.afterEach((to, from, failure) => {
    if (failure || to.path === from.path) return;
    void arrive(to.path, router, { moveFocus: from.matched.length > 0 });
  });
}

async function arrive(path: string, router: Router, { moveFocus }: { moveFocus: boolean }): Promise<void> {
  const before = document.querySelector('h1');
  const until = Date.now() + waitMs;
  await nextTick();
  let heading = document.querySelector('h1');
  // Views come by themselves: the old heading stands until the new one is loaded.
  while ((heading === null || (heading === before && moveFocus)) && Date.now() < until && router.currentRoute.value.path === path) {
    await new Promise((resolve) => setTimeout(resolve, stepMs));
    heading = document.querySelector('h1');
  }
  if (router.currentRoute.value.path !== path || heading === null) return;
  document.title = `${heading.textContent?.trim() ?? ''} · Patchrow`;
  if (!moveFocus || isHeldBy(document.activeElement)) return;
  heading.tabIndex = -1;
  heading.focus({ preventScroll: true });
}

/** True when a control of the new screen has the focus already. */
function isHeldBy(element: Element | null): boolean {
  return element !== null && element.closest('main') !== null && element.id !== 'main';
}
