/** A file that was being sent when its page was closed: chosen again, it goes on where it stopped. */
export interface UnfinishedUpload {
  readonly key: string;
  readonly fileName: string;
  readonly bytes: number;
}

/** The server keeps what arrived for a day. */
const keptMs = 24 * 60 * 60 * 1000;
const prefix = 'tus::';

/** What this browser remembers of uploads to an address that did not end, newest first; nothing where it keeps no store. */
export function unfinishedUploads(endpoint: string, now: number): UnfinishedUpload[] {
  const store = storeOfBrowser();
  const keys = store === null ? [] : Array.from({ length: store.length }, (_, at) => store.key(at)!).filter((key) => key.startsWith(prefix) && key.includes(`-${endpoint}::`));
  return keys
    .flatMap((key) => entryOf(key, store!.getItem(key)))
    .filter(({ startedAt }) => now - startedAt < keptMs)
    .sort((a, b) => b.startedAt - a.startedAt)
    .map(({ key, fileName, bytes }) => ({ key, fileName, bytes }));
}

/** Forgets an upload; the server clears away what had arrived by itself. */
export function forgetUnfinished({ key }: UnfinishedUpload): void {
  storeOfBrowser()?.removeItem(key);
}

function storeOfBrowser(): Storage | null {
  try {
    return window.localStorage;
  } catch {
    return null;
  }
}

function entryOf(key: string, text: string | null): { key: string; fileName: string; bytes: number; startedAt: number }[] {
  try {
    const entry = JSON.parse(text ?? '') as { size?: unknown; metadata?: { filename?: unknown }; creationTime?: unknown };
    const [fileName, bytes, startedAt] = [entry.metadata?.filename, entry.size, Date.parse(String(entry.creationTime))];
    return typeof fileName === 'string' && typeof bytes === 'number' && Number.isFinite(startedAt) ? [{ key, fileName, bytes, startedAt }] : [];
  } catch {
    return [];
  }
}
