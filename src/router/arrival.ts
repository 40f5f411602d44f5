import type { Router } from 'vue-router';

const followMs = 15_000;

/**
 * Tells keyboard and screen reader that another screen is there: after a change of place the focus stands on the new
 * heading, and the window is named after it. Screens load bit by bit and may draw their heading anew, so it is followed
 * until the person does something. Focus that the new screen set itself is left alone, and so is the first page.
 */
export function announceArrivals(router: Router): void {
  let letGo = () => {};
  router.afterEach((to, from, failure) => {
    if (failure || to.path === from.path) return;
    letGo();
    letGo = followHeading({ moveFocus: from.matched.length > 0 });
  });
}

function followHeading({ moveFocus }: { moveFocus: boolean }): () => void {
  const old = document.querySelector('h1');
  const oldWords = old?.textContent;

  function settle(): void {
    const heading = document.querySelector('h1');
    // The old heading stands until the new view is there.
    if (heading === null || (heading === old && heading.textContent === oldWords)) return;
    document.title = `${(heading.textContent ?? '').replace(/\s+/g, ' ').trim()} · Patchrow`;
    if (!moveFocus || isHeldBy(document.activeElement)) return;
    heading.tabIndex = -1;
    heading.focus({ preventScroll: true });
  }

  const observer = new MutationObserver(settle);
  observer.observe(document.body, { subtree: true, childList: true, characterData: true });
  const letGo = () => {
    observer.disconnect();
    clearTimeout(timer);
    for (const act of ['keydown', 'pointerdown']) document.removeEventListener(act, letGo, true);
  };
  const timer = setTimeout(letGo, followMs);
  for (const act of ['keydown', 'pointerdown']) document.addEventListener(act, letGo, true);
  return letGo;
}

/** True when a control of the new screen has the focus already. */
function isHeldBy(element: Element | null): boolean {
  return element !== null && element.closest('main') !== null && element.id !== 'main';
}
