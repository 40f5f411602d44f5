import { defineStore } from 'pinia';
import { shallowRef } from 'vue';

export interface Notice {
  readonly id: number;
  readonly kind: 'done' | 'news' | 'asks' | 'stop';
  readonly text: string;
  readonly act?: { readonly label: string; readonly run: () => void };
  /** Stays until closed. */
  readonly stays?: boolean;
}

const shownMs = 8000;

/** Short sentences at the lower left that say what just happened. */
export const useNoticesStore = defineStore('notices', () => {
  const notices = shallowRef<readonly Notice[]>([]);
  let last = 0;

  function close(id: number): void {
    notices.value = notices.value.filter((notice) => notice.id !== id);
  }

  function say(text: string, { kind = 'done', act, stays = false }: Partial<Omit<Notice, 'id' | 'text'>> = {}): number {
    const id = ++last;
    notices.value = [...notices.value.slice(-3), { id, kind, text, stays, ...(act ? { act } : {}) }];
    if (!stays) setTimeout(() => close(id), shownMs);
    return id;
  }

  return { notices, say, close };
});
