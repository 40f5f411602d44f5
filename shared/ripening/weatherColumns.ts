import { columnNamed, plainWords, type PastedTable } from './pastedTable.ts';

/** Which columns of a station's table are day, temperatures and rain, and in which unit each stands. */
export type ColumnUse = 'day' | 'maxC' | 'minC' | 'rainMm';
export type WeatherUnits = 'metric' | 'us';

const words: Record<ColumnUse, readonly string[]> = {
  day: ['day', 'date', 'fecha', 'dia', 'jour', 'data', 'giorno', 'datum', 'aaaammjj', 'yyyymmdd'],
  maxC: ['max', 'tmax', 'maximum', 'high', 'maxima', 'maximo', 'maximale', 'massima', 'tx'],
  minC: ['min', 'tmin', 'minimum', 'low', 'minima', 'minimo', 'minimale', 'tn'],
  rainMm: ['rain', 'rainfall', 'precipitation', 'prec', 'precip', 'lluvia', 'precipitacion', 'pluie', 'precipitations', 'pioggia', 'precipitazioni', 'chuva', 'precipitacao', 'rr'],
};
/** A station has highest and lowest of these, too. */
const ofSomethingElse =
  /(^| )(wind|gust|humidity|hum|rh|pressure|radiation|solar|dew|dewpoint|soil|wet|viento|racha|humedad|presion|radiacion|suelo|vent|rafale|humidite|pression|rayonnement|sol|vento|raffica|umidita|pressione|radiazione|suolo|rajada|humidade|pressao|radiacao|solo)( |$)/;
const hottestC = 50;
const warmestNightC = 33;
const linesAboveHead = 20;

export type ColumnsAt = Record<ColumnUse, number>;

export function weatherColumns(names: readonly string[]): ColumnsAt {
  const own = names.map((name) => (ofSomethingElse.test(plainWords(name)) ? '' : name));
  return Object.fromEntries((Object.keys(words) as ColumnUse[]).map((use) => [use, columnNamed(own, words[use])])) as ColumnsAt;
}

/** The text from its head on, and how many lines stood above it (name of the station, day of the export). */
export function fromHead(text: string, read: (text: string) => PastedTable): { readonly table: PastedTable; readonly above: number } {
  const lines = text.split(/(?<=\r\n|\n|\r(?!\n))/);
  for (let above = 0; above < Math.min(lines.length, linesAboveHead); above++) {
    // The lines below decide the separator with the head, so each try reads anew.
    const head = weatherColumns(read(lines[above]!).names);
    if (head.day >= 0 && (head.maxC >= 0 || head.minC >= 0 || head.rainMm >= 0)) return { table: read(lines.slice(above).join('')), above };
  }
  return { table: read(text), above: 0 };
}

export interface UnitsFound {
  /** Null where neither head nor figures tell. */
  readonly temperature: WeatherUnits | null;
  readonly rain: WeatherUnits | null;
}

/** Each column by its own mark; where there is none by the answer, else by the other columns and by whether the figures can be °C. */
export function unitsFound(names: readonly string[], at: ColumnsAt, given: { answer: WeatherUnits | null; warmest: number; warmestNight: number }): UnitsFound {
  const head = (...uses: ColumnUse[]) => uses.map((use) => plainWords(names[at[use]] ?? '')).join(' ');
  const marked = head('maxC', 'minC');
  const temperature = /(^| |°)f( |$)|fahrenheit/.test(marked) ? 'us' : /(^| |°)c( |$)|celsius/.test(marked) ? 'metric' : null;
  const fall = head('rainMm');
  const rain = /(^| )(inch|inches|in)( |$)/.test(fall) ? 'us' : /(^| )mm( |$)/.test(fall) ? 'metric' : null;
  const none = at.maxC < 0 && at.minC < 0;
  const asCelsius = given.warmest <= hottestC && given.warmestNight <= warmestNightC ? 'metric' : null;
  const degrees = temperature ?? given.answer ?? (rain === 'us' ? null : asCelsius);
  // °F beside rain without a unit may be either.
  const depth = rain ?? given.answer ?? (none || degrees === 'metric' ? 'metric' : null);
  return { temperature: none ? depth : degrees, rain: at.rainMm < 0 ? degrees : depth };
}
