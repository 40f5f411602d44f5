import type { ObjectDirective } from 'vue';

/** A heading that takes the focus when its sheet opens, so that keyboard and screen reader go on from there. */
export const standHere: ObjectDirective<HTMLElement> = {
  mounted(heading) {
    heading.tabIndex = -1;
    heading.focus({ preventScroll: true });
  },
};
