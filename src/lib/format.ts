import { numberText, thinSpace } from '../../shared/numberText.ts';
import { decimalsOf, shownValue, unitOf, unitWord, type Quantity, type UnitSystem } from './units.ts';

/** How figures and dates are written: narrow space for thousands, true minus, narrow spaces around ±, unit after a narrow space. */
export type Language = 'en' | 'es' | 'fr' | 'it' | 'pt';

export interface FormatPreferences {
  readonly language: Language;
  readonly units: UnitSystem;
  /** IANA zone for times of day, the estate's; the device's own when missing. */
  readonly timeZone?: string;
}

/** Day before month, as estates write it; the region only decides about order and separators. */
const regions: Record<Language, string> = { en: 'en-GB', es: 'es-ES', fr: 'fr-FR', it: 'it-IT', pt: 'pt-PT' };

export type DateStyle = 'short' | 'weekday' | 'long' | 'month' | 'year';
const dateParts: Record<DateStyle, Intl.DateTimeFormatOptions> = {
  short: { day: 'numeric', month: 'short' },
  weekday: { weekday: 'short', day: 'numeric', month: 'short' },
  long: { weekday: 'long', day: 'numeric', month: 'long', year: 'numeric' },
  month: { month: 'short' },
  year: { day: 'numeric', month: 'short', year: 'numeric' },
};

export type Format = ReturnType<typeof createFormat>;

/** Everything that turns a value into text for one person. `createFormat({language:'fr',units:'metric'}).number(4140.5, 1)` is "4 140,5" with a narrow space. */
export function createFormat({ language, units, timeZone }: FormatPreferences) {
  const region = regions[language];
  const number = (value: number, decimals = 0) => numberText(value, decimals, region);
  const withUnit = (quantity: Quantity, stored: number, decimals = decimalsOf(quantity, units)) =>
    `${number(shownValue(quantity, stored, units), decimals)}${thinSpace}${unitOf(quantity, units, language)}`;

  return {
    language,
    region,
    units,
    /** The mark between whole and part, as this reader writes it. */
    point: new Intl.NumberFormat(region).formatToParts(0.5).find(({ type }) => type === 'decimal')?.value ?? '.',
    number,
    withUnit,
    /** Unit of a measure, which is stored in English where it is a word. */
    unitWord: (unit: string) => unitWord(unit, language),
    /** Figure alone, for a column whose head carries the unit. */
    figure: (quantity: Quantity, stored: number, decimals = decimalsOf(quantity, units)) => number(shownValue(quantity, stored, units), decimals),
    unit: (quantity: Quantity) => unitOf(quantity, units, language),
    shown: (quantity: Quantity, stored: number) => shownValue(quantity, stored, units),
    plusMinus: (halfWidth: number, decimals = 1) => `±${thinSpace}${number(halfWidth, decimals)}`,
    estimate: (value: number, halfWidth: number, decimals = 1) => `${number(value, decimals)}${thinSpace}±${thinSpace}${number(halfWidth, decimals)}`,
    /** Share 0.95 as "95 %". */
    percent: (share: number, decimals = 0) => `${number(share * 100, decimals)}${thinSpace}%`,
    date: (date: string | Date, style: DateStyle = 'short') => dateText({ date, style, region, timeZone }),
    time: (instant: string | Date) => new Intl.DateTimeFormat(region, { hour: '2-digit', minute: '2-digit', hourCycle: 'h23', ...zone(timeZone) }).format(new Date(instant)),
    dateTime: (instant: string | Date) =>
      new Intl.DateTimeFormat(region, { ...dateParts.weekday, hour: '2-digit', minute: '2-digit', hourCycle: 'h23', ...zone(timeZone) }).format(new Date(instant)),
    duration: (minutes: number) => durationText(minutes, number),
    bytes: (bytes: number) => bytesText(bytes, number),
    list: (items: readonly string[], joined: 'and' | 'or' = 'and') => new Intl.ListFormat(region, { type: joined === 'and' ? 'conjunction' : 'disjunction' }).format(items),
  };
}

interface DateText {
  date: string | Date;
  style: DateStyle;
  region: string;
  timeZone: string | undefined;
}

/** A bare calendar day ("2026-09-03") belongs to no time zone and is written as it stands. */
function dateText({ date, style, region, timeZone }: DateText): string {
  const bareDay = typeof date === 'string' && /^\d{4}-\d{2}-\d{2}$/.test(date);
  const options = { ...dateParts[style], ...(bareDay ? { timeZone: 'UTC' } : zone(timeZone)) };
  const text = new Intl.DateTimeFormat(region, options).format(new Date(date));
  const plain = style === 'weekday' ? text.replace(',', '') : text;
  // French counts the first of a month only: "le 1er septembre".
  return region === 'fr-FR' ? plain.replace(/\b1 (?=\p{L})/u, '1er ') : plain;
}

function zone(timeZone: string | undefined): Intl.DateTimeFormatOptions {
  return timeZone === undefined ? {} : { timeZone };
}

function durationText(minutes: number, number: (value: number) => string): string {
  const whole = Math.round(minutes);
  const [hours, rest] = [Math.floor(whole / 60), whole % 60];
  if (hours === 0) return `${rest}${thinSpace}min`;
  return rest === 0 ? `${number(hours)}${thinSpace}h` : `${number(hours)}${thinSpace}h ${rest}${thinSpace}min`;
}

function bytesText(bytes: number, number: (value: number, decimals?: number) => string): string {
  const step = bytes < 1000 ? 0 : bytes < 1e6 ? 1 : bytes < 1e9 ? 2 : 3;
  const value = bytes / 1000 ** step;
  return `${number(value, step > 0 && value < 10 ? 1 : 0)}${thinSpace}${['B', 'kB', 'MB', 'GB'][step]}`;
}
