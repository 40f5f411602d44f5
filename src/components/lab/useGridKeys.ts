/** Where a key goes from a cell of the typing grid. */
export interface GridMove {
  readonly rows: number;
  readonly columns: number;
}

/**
 * Arrows and Enter move between cells; sideways only from the end of the text, so that the caret can be moved inside a
 * cell. Tab is left to the browser. Null when the key is not for moving.
 */
export function moveOf(event: KeyboardEvent): GridMove | null {
  const field = event.target as HTMLInputElement;
  if (event.altKey || event.metaKey || event.ctrlKey) return null;
  if (event.key === 'ArrowDown' || (event.key === 'Enter' && !event.shiftKey)) return { rows: 1, columns: 0 };
  if (event.key === 'ArrowUp' || (event.key === 'Enter' && event.shiftKey)) return { rows: -1, columns: 0 };
  if (event.shiftKey) return null;
  const [start, end] = [field.selectionStart ?? 0, field.selectionEnd ?? 0];
  const isWhole = start === 0 && end === field.value.length;
  if (event.key === 'ArrowLeft' && (isWhole || (start === 0 && end === 0))) return { rows: 0, columns: -1 };
  if (event.key === 'ArrowRight' && (isWhole || (start === field.value.length && end === start))) return { rows: 0, columns: 1 };
  return null;
}
