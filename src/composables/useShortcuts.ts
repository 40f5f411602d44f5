import { onBeforeUnmount, onMounted, readonly, ref } from 'vue';
import { readStored, writeStored } from '../lib/deviceStore.ts';

// Single keys get in the way of speech input and of tired hands: they can be switched off on each device.
const areOn = ref(readStored<boolean>('shortcuts') ?? true);

/** Whether single keys act here, and the switch. */
export function useShortcutSwitch() {
  return {
    areOn: readonly(areOn),
    set(on: boolean): void {
      areOn.value = on;
      writeStored('shortcuts', on);
    },
  };
}

/** Single keys that work anywhere outside a text field and outside a dialog. */
export function useShortcuts(acts: Readonly<Record<string, () => void>>): void {
  function press(event: KeyboardEvent): void {
    const act = acts[event.key];
    if (!act || !areOn.value || event.defaultPrevented || event.ctrlKey || event.metaKey || event.altKey) return;
    if (takesLetters(event.target) || document.querySelector('[aria-modal="true"]') !== null) return;
    event.preventDefault();
    act();
  }
  onMounted(() => document.addEventListener('keydown', press));
  onBeforeUnmount(() => document.removeEventListener('keydown', press));
}

function takesLetters(target: EventTarget | null): boolean {
  if (!(target instanceof HTMLElement)) return false;
  if (target.isContentEditable || target instanceof HTMLTextAreaElement || target instanceof HTMLSelectElement) return true;
  return target instanceof HTMLInputElement && !['checkbox', 'radio', 'button', 'range'].includes(target.type);
}
