import { defineStore } from 'pinia';
import { ref } from 'vue';

/** Whether the server answers, and when it last did. Screens say so in words; they never guess. */
export const useContactStore = defineStore('contact', () => {
  const isReached = ref(true);
  const lastContactAt = ref<string | null>(null);

  function note(reached: boolean, now: Date): void {
    isReached.value = reached;
    if (reached) lastContactAt.value = now.toISOString();
  }

  return { isReached, lastContactAt, note };
});
