import { onBeforeUnmount } from 'vue';

interface UndoKeys {
  readonly undo: () => void;
  readonly redo: () => void;
}

/** Ctrl or ⌘ with Z and Y while a screen is open. Where text is being typed they belong to the text. */
export function useUndoKeys({ undo, redo }: UndoKeys): void {
  function onKey(event: KeyboardEvent): void {
    const isTyping = event.target instanceof Element && event.target.closest('input, textarea, select, [contenteditable]') !== null;
    const key = event.key.toLowerCase();
    if (isTyping || event.altKey || !(event.ctrlKey || event.metaKey) || (key !== 'z' && key !== 'y')) return;
    // Else the browser takes back what was typed last, wherever that field is.
    event.preventDefault();
    if (key === 'y' || event.shiftKey) redo();
    else undo();
  }
  document.addEventListener('keydown', onKey);
  onBeforeUnmount(() => document.removeEventListener('keydown', onKey));
}
