import type { Estimate } from '../sampling/precision.ts';
import { asDependent, combineDependent, type Dependent } from './dependent.ts';
import { fitTank, litresFrom, type Tank } from './tankFit.ts';

/**
 * Every grouping of zones that could be a lot, each with a tank that it fits and what it costs: zones → choices. The
 * best set of them is a set-partitioning programme (Balas & Padberg 1976, SIAM Review 18:710): a zone in one lot at
 * most, a tank for one lot at most. Cost: groupings grow fast with zones, so tanks and days cut them off early and a
 * limit is kept; whether it was met is told.
 */
export const COMPARED = ['brix', 'ph', 'ta'] as const;
export type Compared = (typeof COMPARED)[number];

export interface ChoiceZone {
  readonly id: string;
  readonly variety: string;
  readonly wineType: string;
  readonly tonnes: Estimate | Dependent;
  readonly values: Readonly<Record<Compared, { readonly mean: number; readonly sd: number } | null>>;
}

export interface ChoiceTank extends Tank {
  readonly id: string;
}

export interface Range {
  readonly low: number | null;
  readonly high: number | null;
}

export interface ChoiceRules {
  /** Varieties that may go into one lot; a variety named nowhere stays alone. */
  readonly together: readonly (readonly string[])[];
  readonly targets: Readonly<Partial<Record<Compared, Range>>>;
  readonly litresPerT: Readonly<Record<string, Estimate>>;
  /** A lot must fit its tank with at least this chance. */
  readonly leastChance: number;
  /** Tonnes that can be picked and taken in on one day; null for no limit. */
  readonly dayTonnes: number | null;
  /** Tonnes that the press takes on one day: white and rosé need it on the day they come in; null for no limit. */
  readonly pressTonnes: number | null;
}

export interface LotChoice {
  /** Indexes of zones, rising. */
  readonly zones: readonly number[];
  readonly tank: number;
  readonly cost: number;
  readonly tonnes: number;
  readonly chanceOfFit: number;
  readonly chanceBelowMinimum: number;
}

export interface LotChoices {
  readonly choices: readonly LotChoice[];
  /** False when there were too many groupings to look at all. */
  readonly complete: boolean;
}

/** A tonne left out costs this much: more than any unlikeness of a lot that can be picked. */
export const LEFT_OUT_COST = 100;
/** Weights of the rest are judgement: half-empty and doubtful tanks, and one more lot to look after. */
const BELOW_MINIMUM_COST = 5;
const DOUBTFUL_FIT_COST = 2;
const LOT_COST = 0.1;
const MOST_VISITS = 150_000;
const MOST_CHOICES = 4000;

export function lotChoices(zones: readonly ChoiceZone[], tanks: readonly ChoiceTank[], rules: ChoiceRules): LotChoices {
  const perLot = (LOT_COST * zones.reduce((sum, { tonnes }) => sum + tonnes.value, 0)) / Math.max(1, zones.length);
  const found: LotChoice[] = [];
  let visits = 0;
  const mostLitres = Math.max(0, ...tanks.map(({ volumeL, fillShare }) => volumeL * fillShare));

  const grow = (chosen: number[], next: number): void => {
    for (let zone = next; zone < zones.length && visits < MOST_VISITS; zone++) {
      if (chosen.length > 0 && !mayJoin(zones[chosen[0]!]!, zones[zone]!, rules)) continue;
      visits += 1;
      const group = [...chosen, zone];
      const whole = group.map((index) => zones[index]!);
      const tonnes = sumTonnes(whole);
      // Larger groups only grow; what is too big for every tank or day stays so.
      if (tonnes.value * litresOf(whole, rules).value > mostLitres || tonnes.value > dayLimit(whole, rules)) continue;
      const unlike = unlikeness(whole);
      if (unlike !== null && missedTarget(whole, rules) === null) {
        tanks.forEach((tank, index) => {
          const fit = fitTank(litresFrom(tonnes, litresOf(whole, rules)), tank);
          if (fit.chanceOfFit < rules.leastChance) return;
          const cost = unlike + perLot + tonnes.value * (BELOW_MINIMUM_COST * fit.chanceBelowMinimum + DOUBTFUL_FIT_COST * (1 - fit.chanceOfFit));
          found.push({ zones: group, tank: index, cost, tonnes: tonnes.value, chanceOfFit: fit.chanceOfFit, chanceBelowMinimum: fit.chanceBelowMinimum });
        });
      }
      grow(group, zone + 1);
    }
  };
  grow([], 0);
  const complete = visits < MOST_VISITS && found.length <= MOST_CHOICES;
  return { choices: found.length <= MOST_CHOICES ? found : thin(found), complete };
}

/** Red must needs no press on the day it comes in; white and rosé do. */
export const isPressed = ({ wineType }: Pick<ChoiceZone, 'wineType'>): boolean => wineType !== 'red';

/** Tonnes of these zones that one day takes in: what can be picked, and for what is pressed at once what the press takes. */
export function dayLimit(zones: readonly ChoiceZone[], { dayTonnes, pressTonnes }: Pick<ChoiceRules, 'dayTonnes' | 'pressTonnes'>): number {
  return Math.min(dayTonnes ?? Infinity, zones.some(isPressed) ? (pressTonnes ?? Infinity) : Infinity);
}

/** Single zones and the cheapest groupings a tonne. */
function thin(found: readonly LotChoice[]): LotChoice[] {
  const rank = ({ zones, cost, tonnes }: LotChoice) => (zones.length === 1 ? -Infinity : cost / tonnes);
  return [...found].sort((a, b) => rank(a) - rank(b)).slice(0, MOST_CHOICES);
}

export function mayJoin(a: ChoiceZone, b: ChoiceZone, { together }: Pick<ChoiceRules, 'together'>): boolean {
  if (a.wineType !== b.wineType) return false;
  return a.variety === b.variety || together.some((varieties) => varieties.includes(a.variety) && varieties.includes(b.variety));
}

export function sumTonnes(zones: readonly ChoiceZone[]): Dependent {
  return combineDependent(zones.map(({ tonnes }) => ({ factor: 1, estimate: asDependent(tonnes) })));
}

export function litresOf(zones: readonly ChoiceZone[], { litresPerT }: Pick<ChoiceRules, 'litresPerT'>): Estimate {
  const found = litresPerT[zones[0]!.wineType];
  if (found === undefined) throw new Error(`No litres a tonne for ${zones[0]!.wineType}`);
  return found;
}

/**
 * How unlike the zones of a lot are: tonnes times squared distance from the lot's mean, in spreads inside the zones,
 * averaged over the measures that all of them have. 0 for one zone; null when several have no measure in common.
 */
export function unlikeness(zones: readonly ChoiceZone[]): number | null {
  if (zones.length === 1) return 0;
  const shared = COMPARED.filter((code) => zones.every(({ values }) => values[code] !== null));
  if (shared.length === 0) return null;
  return zones.reduce((sum, zone) => sum + zone.tonnes.value * distanceFrom(zone, zones, shared), 0);
}

/** Mean squared distance of a zone from the mean of a lot, in spreads inside its zones. */
export function distanceFrom(zone: ChoiceZone, lot: readonly ChoiceZone[], shared: readonly Compared[]): number {
  const squares = shared.map((code) => {
    const { mean, sd } = lotMean(lot, code)!;
    return sd > 0 ? ((zone.values[code]!.mean - mean) / sd) ** 2 : 0;
  });
  return squares.reduce((sum, square) => sum + square, 0) / shared.length;
}

/** Mean and pooled spread inside the zones, by tonnes; null while a zone was not read. */
export function lotMean(zones: readonly ChoiceZone[], code: Compared): { readonly mean: number; readonly sd: number } | null {
  const total = zones.reduce((sum, { tonnes }) => sum + tonnes.value, 0);
  let [mean, variance] = [0, 0];
  for (const { values, tonnes } of zones) {
    const value = values[code];
    if (value === null) return null;
    mean += (value.mean * tonnes.value) / total;
    variance += (value.sd ** 2 * tonnes.value) / total;
  }
  return { mean, sd: Math.sqrt(variance) };
}

/** First target that the expected lot misses, or null. A zone that was not read cannot be said to meet one. */
export function missedTarget(zones: readonly ChoiceZone[], { targets }: Pick<ChoiceRules, 'targets'>): { readonly measure: Compared; readonly value: number | null } | null {
  for (const measure of COMPARED) {
    const range = targets[measure];
    if (range === undefined || (range.low === null && range.high === null)) continue;
    const found = lotMean(zones, measure);
    if (found === null) return { measure, value: null };
    if ((range.low !== null && found.mean < range.low) || (range.high !== null && found.mean > range.high)) return { measure, value: found.mean };
  }
  return null;
}
