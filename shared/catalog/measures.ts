export type MarginKind = 'absolute' | 'relative';
/** Face of the row from which a measure is taken, by the compass; either: whichever lies on the way. */
export const rowSides = ['either', 'north', 'east', 'south', 'west'] as const;
export type RowSide = (typeof rowSides)[number];
export type SampledUnit = 'vine' | 'cluster' | 'berryLot';

export interface Measure {
  readonly code: string;
  readonly unit: string;
  readonly decimals: number;
  /** Plausible range: outside it the value is asked about, never refused. */
  readonly min: number;
  readonly max: number;
  readonly marginKind: MarginKind;
  /** Starting margin: in the unit when absolute, a share (0.10) when relative. */
  readonly margin: number;
  readonly sampledUnit: SampledUnit;
  /** Assumed vine-to-vine spread within a zone while nobody has measured it. */
  readonly defaultSpread: { readonly kind: 'sd' | 'cv'; readonly value: number; readonly source: string };
  /** Mean assumed only to turn a relative margin into a unit figure before there are readings. */
  readonly typicalMean: number;
  /** Seconds at the vine for one sample; common practice, the estate replaces it. */
  readonly secondsPerSample: number;
  /** How values combine over area: by vines, or by mass of fruit. */
  readonly weighting: 'vines' | 'mass';
  /** Right-skewed in the field, so that stopping early needs more care. */
  readonly skewed: boolean;
  readonly where: 'field' | 'lab';
}

const rankine = 'Rankine, Cellier & Boehm 1962, between-vine and within-vine parts';
const pagay = 'Pagay & Cheng 2010, Am. J. Enol. Vitic. 61:61';
const judgement = 'planning judgement, replace after one season';
const lowerEnd = 'Aizpurua et al. 2006; planning judgement for the lower end';
const binomial = 'binomial for 4 % missing, a third more because gaps come together; planning judgement';
/** Sources that are said in words, by what the words are called: an estate keeps its source as text, its own or one of these. */
const saidSources: Readonly<Record<string, string>> = { [rankine]: 'rankine', [judgement]: 'judgement', [lowerEnd]: 'lowerEnd', [binomial]: 'binomial' };

/** What the words for a source are called; null where it stands as it was written. */
export function spreadSourceWords(source: string): string | null {
  return saidSources[source] ?? null;
}

/** Measures every estate starts with; an estate adds its own rows in the database. Margins are common starting values of the trade. */
export const measures = [
  { code: 'brix', unit: '°Brix', decimals: 1, min: 5, max: 35, marginKind: 'absolute', margin: 0.5, sampledUnit: 'vine', defaultSpread: { kind: 'sd', value: 1.1, source: rankine }, typicalMean: 22, secondsPerSample: 60, weighting: 'mass', skewed: false, where: 'lab' },
  { code: 'ph', unit: 'pH', decimals: 2, min: 2.5, max: 4.5, marginKind: 'absolute', margin: 0.05, sampledUnit: 'vine', defaultSpread: { kind: 'sd', value: 0.1, source: judgement }, typicalMean: 3.4, secondsPerSample: 60, weighting: 'mass', skewed: false, where: 'lab' },
  { code: 'ta', unit: 'g/L', decimals: 1, min: 2, max: 20, marginKind: 'absolute', margin: 0.5, sampledUnit: 'vine', defaultSpread: { kind: 'sd', value: 0.9, source: judgement }, typicalMean: 7, secondsPerSample: 60, weighting: 'mass', skewed: false, where: 'lab' },
  { code: 'clusterCount', unit: 'clusters', decimals: 0, min: 0, max: 150, marginKind: 'relative', margin: 0.1, sampledUnit: 'vine', defaultSpread: { kind: 'cv', value: 0.25, source: judgement }, typicalMean: 28, secondsPerSample: 90, weighting: 'vines', skewed: false, where: 'field' },
  { code: 'clusterWeight', unit: 'g', decimals: 0, min: 10, max: 1500, marginKind: 'absolute', margin: 5, sampledUnit: 'cluster', defaultSpread: { kind: 'cv', value: 0.4, source: pagay }, typicalMean: 120, secondsPerSample: 40, weighting: 'vines', skewed: true, where: 'field' },
  { code: 'berryWeight', unit: 'g', decimals: 2, min: 0.3, max: 5, marginKind: 'absolute', margin: 0.1, sampledUnit: 'berryLot', defaultSpread: { kind: 'sd', value: 0.12, source: judgement }, typicalMean: 1.4, secondsPerSample: 60, weighting: 'vines', skewed: false, where: 'lab' },
  { code: 'berriesPerCluster', unit: 'berries', decimals: 0, min: 5, max: 500, marginKind: 'relative', margin: 0.1, sampledUnit: 'cluster', defaultSpread: { kind: 'cv', value: 0.35, source: judgement }, typicalMean: 90, secondsPerSample: 120, weighting: 'vines', skewed: false, where: 'field' },
  { code: 'yan', unit: 'mg/L', decimals: 0, min: 20, max: 600, marginKind: 'relative', margin: 0.15, sampledUnit: 'vine', defaultSpread: { kind: 'cv', value: 0.25, source: judgement }, typicalMean: 160, secondsPerSample: 60, weighting: 'mass', skewed: false, where: 'lab' },
  { code: 'malic', unit: 'g/L', decimals: 1, min: 0.1, max: 12, marginKind: 'absolute', margin: 0.4, sampledUnit: 'vine', defaultSpread: { kind: 'sd', value: 0.6, source: judgement }, typicalMean: 2.5, secondsPerSample: 60, weighting: 'mass', skewed: false, where: 'lab' },
  { code: 'rotShare', unit: '%', decimals: 0, min: 0, max: 100, marginKind: 'absolute', margin: 3, sampledUnit: 'vine', defaultSpread: { kind: 'sd', value: 6, source: judgement }, typicalMean: 4, secondsPerSample: 45, weighting: 'mass', skewed: true, where: 'field' },
  { code: 'pruningWeight', unit: 'kg', decimals: 2, min: 0.05, max: 5, marginKind: 'relative', margin: 0.1, sampledUnit: 'vine', defaultSpread: { kind: 'cv', value: 0.252, source: 'Rey-Caramés et al. 2015, Remote Sens. 7:14458' }, typicalMean: 0.7, secondsPerSample: 120, weighting: 'vines', skewed: false, where: 'field' },
  { code: 'yieldPerVine', unit: 'kg', decimals: 2, min: 0, max: 30, marginKind: 'relative', margin: 0.15, sampledUnit: 'vine', defaultSpread: { kind: 'cv', value: 0.4, source: lowerEnd }, typicalMean: 3, secondsPerSample: 240, weighting: 'vines', skewed: true, where: 'field' },
  // Places without a living vine among the 20 ahead along the row, the vine itself not counted: the census by sample, apart from every count on living vines.
  { code: 'missingVines', unit: '/20', decimals: 0, min: 0, max: 20, marginKind: 'absolute', margin: 0.4, sampledUnit: 'vine', defaultSpread: { kind: 'sd', value: 1.2, source: binomial }, typicalMean: 0.8, secondsPerSample: 45, weighting: 'vines', skewed: true, where: 'field' },
] as const satisfies readonly Measure[];

export type MeasureCode = (typeof measures)[number]['code'];

/** The starting row of a measure, or null for one the estate made itself. */
export function catalogMeasure(code: string): Measure | null {
  return measures.find((measure) => measure.code === code) ?? null;
}

export const confidences = [0.9, 0.95, 0.98, 0.99] as const;
export type Confidence = (typeof confidences)[number];
