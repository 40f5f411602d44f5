/** What a key asks of a ledger; null when it asks nothing. Keys of text fields are never taken. */
export type LedgerAct = 'up' | 'down' | 'first' | 'last' | 'open' | 'choose' | 'toMap';

const acts: Readonly<Record<string, LedgerAct>> = {
  ArrowUp: 'up', ArrowDown: 'down', Home: 'first', End: 'last', Enter: 'open', ' ': 'choose', m: 'toMap',
};

export function ledgerAct(event: KeyboardEvent): LedgerAct | null {
  if (event.ctrlKey || event.metaKey || event.altKey || isTyping(event.target)) return null;
  return acts[event.key] ?? null;
}

/** True inside a field where single keys are letters. */
export function isTyping(target: EventTarget | null): boolean {
  if (!(target instanceof HTMLElement)) return false;
  if (target.isContentEditable || target instanceof HTMLTextAreaElement || target instanceof HTMLSelectElement) return true;
  return target instanceof HTMLInputElement && !['checkbox', 'radio', 'button', 'range'].includes(target.type);
}

/** Index of the line that the keyboard moves to. */
export function movedTo(act: LedgerAct, from: number, count: number): number {
  if (act === 'first') return 0;
  if (act === 'last') return count - 1;
  const step = act === 'up' ? -1 : act === 'down' ? 1 : 0;
  return Math.min(count - 1, Math.max(0, from + step));
}
