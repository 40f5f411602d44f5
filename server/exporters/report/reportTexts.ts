import type { NumberNote } from '../../../shared/analysis/numberNotes.ts';
import { en } from './texts/en.ts';
import { es } from './texts/es.ts';
import { fr } from './texts/fr.ts';
import { it } from './texts/it.ts';
import { pt } from './texts/pt.ts';

/** Words of the printed zone report by language. Translations need a native reader before release. */
export const reportTexts = { en, es, fr, it, pt } as const satisfies Record<string, ReportTexts>;

export interface ReportTexts {
  readonly [key: string]: string | readonly string[] | Readonly<Record<string, string>>;
  readonly inWords: readonly string[];
  readonly verdict: Readonly<Record<string, string>>;
  readonly zonesN: string;
  /** By code of a note on the number of zones. */
  readonly number: Readonly<Record<NumberNote['code'], string>>;
  readonly stateOf: Readonly<Record<string, string>>;
  readonly reason: Readonly<Record<string, string>>;
  /** Kinds of layers that are made from another and bear its name. */
  readonly derived: Readonly<Record<string, string>>;
  /** What a person should know before using the zones, by code. */
  readonly warning: Readonly<Record<string, string>>;
  /** What fruit says of another number of zones than the advised one, by code. */
  readonly tried: Readonly<Record<string, string>>;
}
export type ReportLanguage = keyof typeof reportTexts;

/** A text with its `{places}` filled. */
export function filled(text: string, places: Readonly<Record<string, string | number>>): string {
  return text.replace(/\{(\w+)\}/g, (whole, place: string) => String(places[place] ?? whole));
}
