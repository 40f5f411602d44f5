/** Small things a device remembers for itself (gutter, theme). Works as if empty where storage is refused. */
const prefix = 'patchrow.';

export function readStored<T>(key: string): T | null {
  try {
    const text = localStorage.getItem(prefix + key);
    return text === null ? null : (JSON.parse(text) as T);
  } catch {
    return null;
  }
}

export function writeStored(key: string, value: unknown): void {
  try {
    localStorage.setItem(prefix + key, JSON.stringify(value));
  } catch {
    // Private windows refuse storage; the choice then lasts as long as the page.
  }
}
