import { computed, readonly, ref, watch } from 'vue';
import { readStored, writeStored } from '../lib/deviceStore.ts';

export type ThemeChoice = 'system' | 'light' | 'dark' | 'outdoor';
export type Theme = Exclude<ThemeChoice, 'system'>;

// One page has one theme; every caller looks at the same.
const choice = ref<ThemeChoice>(readStored<ThemeChoice>('theme') ?? 'system');
const isField = ref(false);
const systemIsDark = ref(false);

const theme = computed<Theme>(() => {
  if (choice.value !== 'system') return choice.value;
  if (isField.value) return 'outdoor';
  return systemIsDark.value ? 'dark' : 'light';
});

/** Sets the classes that the tokens hang on, and keeps them set. Called once at start. */
export function startTheme(): void {
  const query = matchMedia('(prefers-color-scheme: dark)');
  systemIsDark.value = query.matches;
  query.addEventListener('change', (event) => (systemIsDark.value = event.matches));
  watch(
    theme,
    (now) => {
      const classes = document.documentElement.classList;
      for (const name of ['light', 'dark', 'outdoor']) classes.toggle(name, name === now);
    },
    { immediate: true, flush: 'sync' },
  );
}

/** The theme in force and how to choose it. Field screens are outdoor unless a person locked another theme. */
export function useTheme() {
  return {
    theme: readonly(theme),
    choice: readonly(choice),
    choose(next: ThemeChoice): void {
      choice.value = next;
      writeStored('theme', next);
    },
    /** Screens for the row say so while they stand. */
    setField(inField: boolean): void {
      isField.value = inField;
    },
  };
}

/** Values of colour tokens for canvas and map, read anew whenever the theme changes. `token('slate')` is "#24505E" by day. */
export function useTokens(): (name: string) => string {
  return (name) => {
    void theme.value;
    return getComputedStyle(document.documentElement).getPropertyValue(`--${name}`).trim();
  };
}
