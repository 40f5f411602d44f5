import type { Estimate } from '../sampling/precision.ts';
import { asDependent, combineDependent, type Dependent } from './dependent.ts';
import { fitTank, litresFrom, type Tank } from './tankFit.ts';

/**
 * Every grouping of zones that could be a lot, each with a tank that it fits and what it costs: zones → choices. The
 * best set of them is a set-partitioning programme (Balas & Padberg 1976, SIAM Review 18:710): a zone in one lot at
 * most, a tank for one lot at most. Groupings grow fast with zones: tanks and days cut them off early, tanks that are
 * alike count as one, and where there are still too many only groupings near each zone are taken, which is told.
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
/** Groupings kept at each size around a zone, and tanks tried for each; the first pair that stays under the limit. */
const NEAR = [[4, 3], [3, 2], [2, 2], [2, 1], [1, 1]] as const;

/** `tank` of a choice is the first of its kind; `handOutTanks` gives each lot one of its own. */
export function lotChoices(zones: readonly ChoiceZone[], tanks: readonly ChoiceTank[], rules: ChoiceRules): LotChoices {
  const perLot = (LOT_COST * zones.reduce((sum, { tonnes }) => sum + tonnes.value, 0)) / Math.max(1, zones.length);
  const kinds = [...new Set(tankKinds(tanks))];
  const mostLitres = Math.max(0, ...tanks.map(({ volumeL, fillShare }) => volumeL * fillShare));
  const of = (group: readonly number[]) => group.map((index) => zones[index]!);
  /** Larger groups only grow; what is too big for every tank or day stays so. */
  const mayGrow = (whole: readonly ChoiceZone[]) => {
    const tonnes = whole.reduce((sum, zone) => sum + zone.tonnes.value, 0);
    return tonnes * litresOf(whole, rules).value <= mostLitres && tonnes <= dayLimit(whole, rules);
  };
  const choicesOf = (group: readonly number[]): LotChoice[] => {
    const whole = of(group);
    const unlike = unlikeness(whole);
    if (unlike === null || missedTarget(whole, rules) !== null) return [];
    const tonnes = sumTonnes(whole);
    const litres = litresFrom(tonnes, litresOf(whole, rules));
    return kinds.flatMap((tank) => {
      const { chanceOfFit, chanceBelowMinimum } = fitTank(litres, tanks[tank]!);
      const cost = unlike + perLot + tonnes.value * (BELOW_MINIMUM_COST * chanceBelowMinimum + DOUBTFUL_FIT_COST * (1 - chanceOfFit));
      return chanceOfFit < rules.leastChance ? [] : [{ zones: group, tank, cost, tonnes: tonnes.value, chanceOfFit, chanceBelowMinimum }];
    });
  };

  const found: LotChoice[] = [];
  let visits = 0;
  const grow = (chosen: readonly number[], next: number): void => {
    for (let zone = next; zone < zones.length && visits < MOST_VISITS && found.length <= MOST_CHOICES; zone++) {
      if (chosen.length > 0 && !mayJoin(zones[chosen[0]!]!, zones[zone]!, rules)) continue;
      visits += 1;
      const group = [...chosen, zone];
      if (!mayGrow(of(group))) continue;
      found.push(...choicesOf(group));
      grow(group, zone + 1);
    }
  };
  grow([], 0);
  if (visits < MOST_VISITS && found.length <= MOST_CHOICES) return { choices: found, complete: true };
  for (const [each, tanksEach] of NEAR) {
    const near = nearGroups(zones, { each, joins: (a, b) => mayJoin(a, b, rules), mayGrow }).flatMap((group) => choicesOf(group).sort((a, b) => a.cost - b.cost).slice(0, tanksEach));
    if (near.length <= MOST_CHOICES || each === 1) return { choices: near.slice(0, MOST_CHOICES), complete: false };
  }
  return { choices: [], complete: false };
}

/** Around each zone the groupings of every size that are most alike, grown a zone at a time from the best of the size below. */
function nearGroups(zones: readonly ChoiceZone[], how: { readonly each: number; readonly joins: (a: ChoiceZone, b: ChoiceZone) => boolean; readonly mayGrow: (whole: readonly ChoiceZone[]) => boolean }): number[][] {
  const all = new Map<string, number[]>();
  zones.forEach((seed, first) => {
    const around = [...zones.keys()].filter((index) => index !== first && how.joins(seed, zones[index]!));
    let best = how.mayGrow([seed]) ? [[first]] : [];
    while (best.length > 0) {
      for (const group of best) all.set(group.join(), group);
      const larger = new Map<string, { group: number[]; unlike: number }>();
      for (const group of best) {
        for (const index of around) {
          if (group.includes(index) || !group.every((one) => how.joins(zones[one]!, zones[index]!))) continue;
          const next = [...group, index].sort((a, b) => a - b);
          const whole = next.map((one) => zones[one]!);
          const unlike = how.mayGrow(whole) ? unlikeness(whole) : null;
          if (unlike !== null) larger.set(next.join(), { group: next, unlike });
        }
      }
      best = [...larger.values()].sort((a, b) => a.unlike - b.unlike).slice(0, how.each).map(({ group }) => group);
    }
  });
  return [...all.values()].sort((a, b) => a.length - b.length);
}

/** For each tank the first one that is like it: same volume, fill and minimum. */
export function tankKinds(tanks: readonly ChoiceTank[]): number[] {
  return tanks.map((tank) => tanks.findIndex((other) => other.volumeL === tank.volumeL && other.fillShare === tank.fillShare && other.minimumL === tank.minimumL));
}

/** Each lot with a tank of its own among those of its kind. */
export function handOutTanks(lots: readonly LotChoice[], tanks: readonly ChoiceTank[]): LotChoice[] {
  const kinds = tankKinds(tanks);
  const free = new Map(kinds.map((kind) => [kind, kinds.flatMap((one, index) => (one === kind ? [index] : []))]));
  return lots.map((lot) => ({ ...lot, tank: free.get(lot.tank)!.shift()! }));
}

/** Red must needs no press on the day it comes in; white and rosé do. */
export const isPressed = ({ wineType }: Pick<ChoiceZone, 'wineType'>): boolean => wineType !== 'red';

/** Tonnes of these zones that one day takes in: what can be picked, and for what is pressed at once what the press takes. */
export function dayLimit(zones: readonly ChoiceZone[], { dayTonnes, pressTonnes }: Pick<ChoiceRules, 'dayTonnes' | 'pressTonnes'>): number {
  return Math.min(dayTonnes ?? Infinity, zones.some(isPressed) ? (pressTonnes ?? Infinity) : Infinity);
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
function unlikeness(zones: readonly ChoiceZone[]): number | null {
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
function lotMean(zones: readonly ChoiceZone[], code: Compared): { readonly mean: number; readonly sd: number } | null {
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
