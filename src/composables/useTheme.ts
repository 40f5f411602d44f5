import { computed, readonly, ref, watch } from 'vue';
import { readStored, writeStored } from '../lib/deviceStore.ts';

export type ThemeChoice = 'system' | 'light' | 'dark' | 'outdoor';
export type Theme = Exclude<ThemeChoice, 'system'> | 'night';

// One page has one theme; every caller looks at the same.
const choice = ref<ThemeChoice>(readStored<ThemeChoice>('theme') ?? 'system');
const isField = ref(false);
const systemIsDark = ref(false);
/** Whether this phone shows the row by night: chosen in the row, for the phone and not for the person. */
const isNight = ref(readStored<boolean>('nightScreen') ?? false);

const theme = computed<Theme>(() => {
  // In the row, what the hand asked for last comes first; the system's own dark says nothing of the sun.
  if (isField.value && isNight.value) return 'night';
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
      for (const name of ['light', 'dark', 'outdoor', 'night']) classes.toggle(name, name === now || (name === 'outdoor' && now === 'night'));
      const ground = getComputedStyle(document.documentElement).getPropertyValue('--ground').trim();
      // The phone's own bar above the page.
      if (ground !== '') for (const bar of document.querySelectorAll<HTMLMetaElement>('meta[name="theme-color"]')) bar.content = ground;
    },
    { immediate: true, flush: 'sync' },
  );
}

/** The theme in force and how to choose it. Field screens are outdoor unless a person locked another theme, or the phone shows the night. */
export function useTheme() {
  return {
    theme: readonly(theme),
    choice: readonly(choice),
    choose(next: ThemeChoice): void {
      choice.value = next;
      writeStored('theme', next);
    },
    isNight: readonly(isNight),
    showNight(night: boolean): void {
      isNight.value = night;
      writeStored('nightScreen', night);
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
