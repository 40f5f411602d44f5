import { createI18n } from 'vue-i18n';
import type { Language } from './format.ts';

export const languages = ['en', 'es', 'fr', 'it', 'pt'] as const satisfies readonly Language[];

/** Each language by its own name, as its readers look for it. */
export const languageNames: Readonly<Record<Language, string>> = { en: 'English', es: 'Español', fr: 'Français', it: 'Italiano', pt: 'Português' };

// One JSON file a feature and language; the file's name is the first part of its keys ("frame.signOut").
// Texts are found by name so that a new feature brings its own files and touches no list; code never is.
const files = import.meta.glob<{ default: Record<string, unknown> }>('../locales/*/*.json');

/** A date that ends in a stop of its own ("22 nov.") ends its sentence as well. Without looking behind, which phones of 2022 cannot read: to them the whole file would be an error. */
const oneStop = (text: string) => text.replace(/(\p{L})\.\.(?=\s|$)/gu, '$1.');
const elided: Readonly<Record<string, string>> = { il: 'l’', Il: 'L’', del: 'dell’', Del: 'Dell’', dal: 'dall’', Dal: 'Dall’', al: 'all’', nel: 'nell’', sul: 'sull’' };
/** Italian says "l’8" and "dall’11", as these numbers begin with a vowel. */
const italianDays = (text: string) => text.replace(/(^|[^\p{L}])(il|Il|del|Del|dal|Dal|al|nel|sul) (?=(?:8|11)(?![\d.,]))/gu, (_, before: string, article: string) => before + elided[article]!);
/** French sets a space before : ; ? ! and inside « », at which no line may break: narrow before all but the colon. */
const frenchSpaces = (text: string) => text.replace(/ (?=[;?!])/g, '\u202F').replace(/ (?=[:»])/g, '\u00A0').replace(/« /g, '«\u00A0');
/** No line breaks between a number and its percent sign. */
const wholePercents = (text: string) => text.replace(/(\d) (?=%)/g, '$1\u00A0');
const ownWays: Readonly<Record<string, (text: string) => string>> = { it: italianDays, fr: frenchSpaces };
const settled = <Text>(text: Text): Text => (typeof text === 'string' ? ((ownWays[i18n.global.locale.value] ?? String)(wholePercents(oneStop(text))) as Text) : text);

export const i18n = createI18n({ legacy: false, locale: 'en', messages: {} as Record<string, Record<string, never>>, missingWarn: false, fallbackWarn: false, postTranslation: settled });

/** What the phone in the row and the door need; the office's texts come with its first screen. vite.config.ts makes one chunk of each. */
const phoneFeatures: ReadonlySet<string> = new Set(['base', 'conflicts', 'door', 'field', 'frame', 'measures', 'problem', 'rowstrip', 'safety']);

const loaded = new Set<string>();
let isOfficeOpen = false;

/** Loads a language once and makes it the one that is shown. */
export async function showLanguage(language: Language): Promise<void> {
  await load(language, 'phone');
  if (isOfficeOpen) await load(language, 'office');
  i18n.global.locale.value = language;
  document.documentElement.lang = language;
}

/** Loads the texts of the office in the language that is shown, and from now on in every other. */
export async function loadOfficeTexts(): Promise<void> {
  isOfficeOpen = true;
  await load(i18n.global.locale.value as Language, 'office');
}

async function load(language: Language, part: 'phone' | 'office'): Promise<void> {
  if (loaded.has(`${language} ${part}`)) return;
  const own = Object.entries(files).filter(([path]) => path.startsWith(`../locales/${language}/`) && phoneFeatures.has(featureOf(path)) === (part === 'phone'));
  const parts = await Promise.all(own.map(async ([path, read]) => [featureOf(path), (await read()).default] as const));
  i18n.global.mergeLocaleMessage(language, Object.fromEntries(parts) as Record<string, never>);
  loaded.add(`${language} ${part}`);
}

function featureOf(path: string): string {
  return path.slice(path.lastIndexOf('/') + 1, -'.json'.length);
}

/** First of the browser's languages that we speak, English when it asks for none of them. */
export function deviceLanguage(wanted: readonly string[] = navigator.languages): Language {
  const found = wanted.map((tag) => tag.slice(0, 2).toLowerCase()).find((tag): tag is Language => (languages as readonly string[]).includes(tag));
  return found ?? 'en';
}
