import { computed, ref, type Ref } from 'vue';
import type { StripChoice, StripRow, StripVine } from './rowStripTypes.ts';
import { afterTap, choiceBetween, movedVine, wholeRows, type StripMove } from './stripChoose.ts';
import { vineM } from './stripLayout.ts';

const moves: Readonly<Record<string, StripMove>> = { ArrowUp: 'up', ArrowDown: 'down', ArrowLeft: 'left', ArrowRight: 'right', Home: 'start', End: 'end' };

interface StripKeysOptions {
  readonly rows: () => readonly StripRow[];
  readonly vinesPerPanel: () => number | null;
  readonly choice: Ref<StripChoice | null>;
  readonly give: (zone: number) => void;
  readonly undo: () => void;
  readonly redo: () => void;
}

/** Keyboard of the strip: up and down rows, left and right vines, Ctrl by panel, Shift extends, Space is a tap, 1–6 give, u and U undo and redo. */
export function useStripKeys({ rows, vinesPerPanel, choice, give, undo, redo }: StripKeysOptions) {
  const at = ref<StripVine | null>(null);
  const anchor = ref<StripVine | null>(null);

  // Rows may change under the cursor: fall back to the first vine.
  const here = computed<StripVine | null>(() => {
    const first = rows()[0];
    if (!first) return null;
    const row = at.value === null ? undefined : rows().find((one) => one.id === at.value!.rowId);
    return row ? { rowId: row.id, vine: Math.min(at.value!.vine, Math.max(1, row.vineCount)) } : { rowId: first.id, vine: 1 };
  });

  function move(event: KeyboardEvent, to: StripMove): void {
    const from = here.value!;
    const next = movedVine(rows(), from, { move: to, step: event.ctrlKey ? (vinesPerPanel() ?? 10) : 1 });
    if (event.shiftKey) {
      anchor.value ??= from;
      choice.value = choiceBetween(rows(), anchor.value, { here: next, move: to });
    } else anchor.value = null;
    at.value = next;
  }

  function key(event: KeyboardEvent): void {
    const isEdit = event.ctrlKey && !moves[event.key];
    if (here.value === null || event.altKey || event.metaKey || isEdit) return;
    const to = moves[event.key];
    if (to) move(event, to);
    else if (event.key === ' ' || event.key === 'Enter') tap(here.value);
    else if (event.key === 'Escape') choice.value = null;
    else if (/^[1-6]$/.test(event.key)) giveTo(Number(event.key));
    else if (event.key === 'u') undo();
    else if (event.key === 'U') redo();
    else return;
    event.preventDefault();
  }

  /** Space does what a tap does: the row, then from where, then to where. */
  function tap({ rowId, vine }: StripVine): void {
    const rowIndex = rows().findIndex(({ id }) => id === rowId);
    choice.value = afterTap(rows(), choice.value, { tap: { rowIndex, alongM: vineM(rows()[rowIndex]!, vine), extend: false }, vinesPerPanel: vinesPerPanel() });
  }

  function giveTo(zone: number): void {
    choice.value ??= wholeRows([here.value!.rowId]);
    give(zone);
  }

  return { here, key, goTo: (vine: StripVine) => ((at.value = vine), (anchor.value = null)) };
}
