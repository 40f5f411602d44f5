/** Two tabs of the field screen write into one store; each tells the other, so that neither offers a vine that was read in the other. */
const channel = typeof BroadcastChannel === 'undefined' ? null : new BroadcastChannel('patchrow-field');

export function tellOtherTabs(): void {
  channel?.postMessage('written');
}

/** Calls when another tab has written. */
export function whenAnotherTabWrites(handler: () => void): void {
  channel?.addEventListener('message', handler);
}
