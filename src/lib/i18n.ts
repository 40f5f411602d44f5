import { createI18n } from 'vue-i18n';
import type { Language } from './format.ts';

export const languages = ['en', 'es', 'fr', 'it', 'pt'] as const satisfies readonly Language[];

/** Each language by its own name, as its readers look for it. */
export const languageNames: Readonly<Record<Language, string>> = { en: 'English', es: 'Español', fr: 'Français', it: 'Italiano', pt: 'Português' };

// One JSON file a feature and language; the file's name is the first part of its keys ("frame.signOut").
// Texts are found by name so that a new feature brings its own files and touches no list; code never is.
const files = import.meta.glob<{ default: Record<string, unknown> }>('../locales/*/*.json');

export const i18n = createI18n({ legacy: false, locale: 'en', messages: {} as Record<string, Record<string, never>>, missingWarn: false, fallbackWarn: false });

const loaded = new Set<Language>();

/** Loads a language once and makes it the one that is shown. */
export async function showLanguage(language: Language): Promise<void> {
  if (!loaded.has(language)) {
    i18n.global.setLocaleMessage(language, (await textsOf(language)) as Record<string, never>);
    loaded.add(language);
  }
  i18n.global.locale.value = language;
  document.documentElement.lang = language;
}

async function textsOf(language: Language): Promise<Record<string, unknown>> {
  const own = Object.entries(files).filter(([path]) => path.startsWith(`../locales/${language}/`));
  const parts = await Promise.all(own.map(async ([path, load]) => [featureOf(path), (await load()).default] as const));
  return Object.fromEntries(parts);
}

function featureOf(path: string): string {
  return path.slice(path.lastIndexOf('/') + 1, -'.json'.length);
}

/** First of the browser's languages that we speak, English when it asks for none of them. */
export function deviceLanguage(wanted: readonly string[] = navigator.languages): Language {
  const found = wanted.map((tag) => tag.slice(0, 2).toLowerCase()).find((tag): tag is Language => (languages as readonly string[]).includes(tag));
  return found ?? 'en';
}
