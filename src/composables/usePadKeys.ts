import type { Key } from '../../shared/field/valueEntry.ts';

const named: Readonly<Record<string, Key>> = { '.': 'point', ',': 'point', Backspace: 'back' };

/** A keyboard's figures act on the keypad while the focus is anywhere in it; the letter keys of the page stay as they are. */
export function usePadKeys(press: (key: Key) => void): (event: KeyboardEvent) => void {
  return (event) => {
    if (event.ctrlKey || event.metaKey || event.altKey) return;
    const key = named[event.key] ?? (/^\d$/.test(event.key) ? (event.key as Key) : null);
    if (key === null) return;
    event.preventDefault();
    press(key);
  };
}
