import { onBeforeUnmount } from 'vue';

interface SetAside {
  readonly of: string;
  readonly work: unknown;
}

let aside: SetAside | null = null;

/**
 * What was begun on a screen and not yet sent, kept while its person has to sign in again. `of` names screen, thing and person, so that
 * nobody else gets it; `isLeftByForce`: whether the screen closes for that; `work`: what was begun, null when nothing.
 */
export function useSetAside<Work>({ of, isLeftByForce, work }: { of: () => string; isLeftByForce: () => boolean; work: () => Work | null }): { takeBack: () => Work | null } {
  // The name is taken while the person is still known.
  let name = of();
  onBeforeUnmount(() => {
    const begun = work();
    if (isLeftByForce() && begun !== null) aside = { of: name, work: begun };
  });
  return {
    takeBack: () => {
      name = of();
      if (aside?.of !== name) return null;
      const { work: found } = aside;
      aside = null;
      return found as Work;
    },
  };
}
