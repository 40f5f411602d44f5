import { computed, inject, type InjectionKey, type Ref } from 'vue';
import { useI18n } from 'vue-i18n';
import { createFormat, type Format, type Language } from '../lib/format.ts';
import type { UnitSystem } from '../lib/units.ts';

export interface ReaderPreferences {
  readonly units: UnitSystem;
  readonly timeZone?: string;
}

/** The application provides it from the signed-in person; without it figures are metric. */
export const readerPreferencesKey: InjectionKey<Ref<ReaderPreferences>> = Symbol('readerPreferences');

/** The reader's way of writing figures and dates; follows a change of language or units at once. */
export function useFormat(): Format {
  const { locale } = useI18n();
  const preferences = inject(readerPreferencesKey, null);
  const current = computed(() => createFormat({ language: locale.value as Language, ...(preferences?.value ?? { units: 'metric' }) }));
  return new Proxy({} as Format, { get: (_target, key) => current.value[key as keyof Format] });
}
