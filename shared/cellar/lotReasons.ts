import { COMPARED, dayLimit, distanceFrom, litresOf, missedTarget, mayJoin, sumTonnes, type ChoiceRules, type ChoiceTank, type ChoiceZone, type Compared, type LotChoice } from './lotChoices.ts';
import { fitTank, litresFrom } from './tankFit.ts';

/** Why each zone is where it is, in codes and figures that a screen puts into words. */
export interface PlacedReason {
  /** `alone` is the only zone of its lot. */
  readonly code: 'alone' | 'alike';
  /** From the mean of its lot, in spreads inside the zones; null for a zone alone. */
  readonly distance: number | null;
  /** The lot that it would be nearest to if it went there; null where none may take it. */
  readonly nearest: NearestLot | null;
}

export interface NearestLot {
  /** Index among the lots. */
  readonly lot: number;
  /** From the mean of that lot with this zone in it, so that it compares with the distance in its own. */
  readonly distance: number;
  /** What stands against it; null where nothing does but the sum of all lots. */
  readonly against: AgainstReason | null;
}

export type AgainstReason =
  | Extract<LeftOutReason, { code: 'overDay' | 'overPress' | 'tooBig' }>
  /** What stays of its own lot would miss a target. */
  | { readonly code: 'leavesLot'; readonly measure: Compared; readonly value: number };

export type LeftOutReason =
  | { readonly code: 'overDay' | 'overPress'; readonly tonnes: number; readonly limit: number }
  | { readonly code: 'notRead'; readonly measure: Compared }
  | { readonly code: 'outsideTarget'; readonly measure: Compared; readonly value: number }
  | { readonly code: 'tooBig'; readonly litres: number; readonly limit: number; readonly chance: number }
  /** It could be a lot, but the tanks went to groupings that leave fewer tonnes out or are more alike. */
  | { readonly code: 'noTankLeft' };

export function whyPlaced(zone: number, lot: LotChoice, facts: { readonly zones: readonly ChoiceZone[]; readonly lots: readonly LotChoice[]; readonly tanks: readonly ChoiceTank[]; readonly rules: ChoiceRules }): PlacedReason {
  const { zones, lots, rules } = facts;
  const own = zones[zone]!;
  const zonesOf = (one: LotChoice) => one.zones.map((index) => zones[index]!);
  const others = lots.flatMap((other, index) => {
    if (other === lot || !zonesOf(other).every((one) => mayJoin(own, one, rules))) return [];
    const reached = distance(own, [...zonesOf(other), own]);
    return reached === null ? [] : [{ lot: index, distance: reached }];
  });
  const nearest = others.reduce<(typeof others)[number] | null>((best, one) => (best === null || one.distance < best.distance ? one : best), null);
  const alone = lot.zones.length === 1;
  return {
    code: alone ? 'alone' : 'alike',
    distance: alone ? null : distance(own, zonesOf(lot)),
    nearest: nearest && { ...nearest, against: whyNotThere(zone, lot, { ...facts, to: lots[nearest.lot]! }) },
  };
}

/** What forbids a zone the lot `to`: too much for a day, the press or any tank that the two could have, or a target that its own lot would miss without it. */
function whyNotThere(zone: number, from: LotChoice, { zones, lots, tanks, rules, to }: Parameters<typeof whyPlaced>[2] & { readonly to: LotChoice }): AgainstReason | null {
  const joined = [...to.zones, zone].map((index) => zones[index]!);
  const taken = new Set(lots.filter((lot) => lot !== to && (lot !== from || from.zones.length > 1)).map(({ tank }) => tank));
  const tooMuch = overTheDay(joined, rules) ?? overEveryTank(joined, tanks.filter((_, index) => !taken.has(index)), rules);
  if (tooMuch !== null) return tooMuch;
  const rest = from.zones.filter((index) => index !== zone).map((index) => zones[index]!);
  const missed = rest.length === 0 ? null : missedTarget(rest, rules);
  return missed === null || missed.value === null ? null : { code: 'leavesLot', measure: missed.measure, value: missed.value };
}

/** Root of the mean squared distance over the measures in common; null without any. */
function distance(zone: ChoiceZone, lot: readonly ChoiceZone[]): number | null {
  const shared = COMPARED.filter((code) => [zone, ...lot].every(({ values }) => values[code] !== null));
  return shared.length === 0 ? null : Math.sqrt(distanceFrom(zone, lot, shared));
}

export function whyLeftOut(zone: ChoiceZone, tanks: readonly ChoiceTank[], rules: ChoiceRules): LeftOutReason {
  const tooMuch = overTheDay([zone], rules);
  if (tooMuch !== null) return tooMuch;
  const missed = missedTarget([zone], rules);
  if (missed !== null) return missed.value === null ? { code: 'notRead', measure: missed.measure } : { code: 'outsideTarget', measure: missed.measure, value: missed.value };
  return overEveryTank([zone], tanks, rules) ?? { code: 'noTankLeft' };
}

function overTheDay(zones: readonly ChoiceZone[], rules: ChoiceRules): Extract<LeftOutReason, { code: 'overDay' | 'overPress' }> | null {
  const tonnes = sumTonnes(zones).value;
  if (rules.dayTonnes !== null && tonnes > rules.dayTonnes) return { code: 'overDay', tonnes, limit: rules.dayTonnes };
  const limit = dayLimit(zones, rules);
  return tonnes > limit ? { code: 'overPress', tonnes, limit } : null;
}

/** By the largest of the tanks; null where they fit it, or where there is no tank to name. */
function overEveryTank(zones: readonly ChoiceZone[], tanks: readonly ChoiceTank[], rules: ChoiceRules): Extract<LeftOutReason, { code: 'tooBig' }> | null {
  const litres = litresFrom(sumTonnes(zones), litresOf(zones, rules));
  const largest = tanks.reduce<ChoiceTank | null>((best, tank) => (best === null || tank.volumeL * tank.fillShare > best.volumeL * best.fillShare ? tank : best), null);
  if (largest === null) return null;
  const { chanceOfFit, workingL } = fitTank(litres, largest);
  return chanceOfFit < rules.leastChance ? { code: 'tooBig', litres: litres.value, limit: workingL, chance: chanceOfFit } : null;
}
