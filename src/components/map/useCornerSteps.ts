import { shallowRef, watch, type Ref, type ShallowRef } from 'vue';
import type { Corners } from './outline.ts';

/** A corner that moves again so soon is still being dragged, or its figure typed. */
const sameMoveMs = 1000;

/** Steps back and forth over the corners of a shape, however they were changed: pressed, dragged, typed, pasted or cleared. */
export function useCornerSteps(corners: Ref<Corners>): { canGoBack: Readonly<ShallowRef<boolean>>; back: () => void; forth: () => void } {
  const canGoBack = shallowRef(false);
  let past: Corners[] = [];
  let future: Corners[] = [];
  let stepped: string | null = null;
  let last = { corner: -1, at: -Infinity };

  watch(corners, (now, before) => {
    if (JSON.stringify(now) === stepped || JSON.stringify(now) === JSON.stringify(before)) return;
    stepped = null;
    const corner = movedCorner(before, now);
    const isSameMove = corner >= 0 && corner === last.corner && performance.now() - last.at < sameMoveMs;
    last = { corner, at: performance.now() };
    if (!isSameMove) past = [...past, before];
    future = [];
    canGoBack.value = true;
  });

  function step(to: Corners | undefined, kept: 'past' | 'future'): void {
    if (!to) return;
    if (kept === 'future') [past, future] = [past.slice(0, -1), [...future, corners.value]];
    else [past, future] = [[...past, corners.value], future.slice(0, -1)];
    [stepped, last] = [JSON.stringify(to), { corner: -1, at: -Infinity }];
    corners.value = to;
    canGoBack.value = past.length > 0;
  }
  return { canGoBack, back: () => step(past.at(-1), 'future'), forth: () => step(future.at(-1), 'past') };
}

/** The one corner that stands elsewhere; -1 when corners came or went or several moved. */
function movedCorner(before: Corners, now: Corners): number {
  if (before.length !== now.length) return -1;
  const moved = now.flatMap(([lon, lat], at) => (lon === before[at]![0] && lat === before[at]![1] ? [] : [at]));
  return moved.length === 1 ? moved[0]! : -1;
}
