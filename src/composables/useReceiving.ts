import { ref, shallowRef, type Ref, type ShallowRef } from 'vue';
import type { Receipt } from '../stores/lab.ts';

const batchSize = 100;
const shownAtMost = 8;

export interface Receiving {
  /** Labels read and not taken in yet: on their way, or kept because the last try failed. */
  waiting: Ref<readonly string[]>;
  /** What the last labels turned out to be, the newest first. */
  last: ShallowRef<readonly Receipt[]>;
  add: (codes: readonly string[]) => Promise<void>;
}

/**
 * Labels as a scanner gives them, faster than the server may answer: none waits for the one before, what arrives meanwhile
 * goes together, and what could not be sent stays and goes with the next. `send` answers null when it failed.
 */
export function useReceiving(send: (codes: readonly string[]) => Promise<readonly Receipt[] | null>): Receiving {
  const waiting = ref<readonly string[]>([]);
  const last = shallowRef<readonly Receipt[]>([]);
  let isSending = false;

  async function add(codes: readonly string[]): Promise<void> {
    waiting.value = [...new Set([...waiting.value, ...codes])];
    if (isSending) return;
    isSending = true;
    try {
      while (waiting.value.length > 0) {
        const batch = waiting.value.slice(0, batchSize);
        const receipts = await send(batch);
        if (receipts === null) return;
        waiting.value = waiting.value.filter((code) => !batch.includes(code));
        last.value = [...[...receipts].reverse(), ...last.value.filter(({ code }) => !batch.includes(code))].slice(0, Math.max(shownAtMost, receipts.length));
      }
    } finally {
      isSending = false;
    }
  }
  return { waiting, last, add };
}
