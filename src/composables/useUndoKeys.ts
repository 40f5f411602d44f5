import { onBeforeUnmount } from 'vue';

interface UndoKeys {
  readonly undo: () => void;
  readonly redo: () => void;
}

/** Who listens, the innermost last: while a shape is drawn the keys take its corners back, and not an edit behind it. */
const open: UndoKeys[] = [];

/** Ctrl or ⌘ with Z and Y while a screen, or a part of it, is open. Where text is being typed they belong to the text. */
export function useUndoKeys(keys: UndoKeys): void {
  function onKey(event: KeyboardEvent): void {
    if (open.at(-1) !== keys) return;
    const isTyping = event.target instanceof Element && event.target.closest('input, textarea, select, [contenteditable]') !== null;
    const key = event.key.toLowerCase();
    if (isTyping || event.altKey || !(event.ctrlKey || event.metaKey) || (key !== 'z' && key !== 'y')) return;
    // Else the browser takes back what was typed last, wherever that field is.
    event.preventDefault();
    if (key === 'y' || event.shiftKey) keys.redo();
    else keys.undo();
  }
  open.push(keys);
  document.addEventListener('keydown', onKey);
  onBeforeUnmount(() => {
    open.splice(open.indexOf(keys), 1);
    document.removeEventListener('keydown', onKey);
  });
}
