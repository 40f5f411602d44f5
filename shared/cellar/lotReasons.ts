import { COMPARED, dayLimit, distanceFrom, litresOf, missedTarget, mayJoin, sumTonnes, type ChoiceRules, type ChoiceTank, type ChoiceZone, type Compared, type LotChoice } from './lotChoices.ts';
import { fitTank, litresFrom } from './tankFit.ts';

/** Why each zone is where it is, in codes and figures that a screen puts into words. */
export type PlacedReason =
  /** The only zone of its lot: none that may join it was as near, or they would not fit together. */
  | { readonly code: 'alone'; readonly distance: null; readonly elsewhere: number | null }
  /** Distance from the lot's mean in spreads inside the zones, and from the nearest other lot that it might join. */
  | { readonly code: 'alike'; readonly distance: number; readonly elsewhere: number | null };

export type LeftOutReason =
  | { readonly code: 'overDay' | 'overPress'; readonly tonnes: number; readonly limit: number }
  | { readonly code: 'notRead'; readonly measure: Compared }
  | { readonly code: 'outsideTarget'; readonly measure: Compared; readonly value: number }
  | { readonly code: 'tooBig'; readonly litres: number; readonly limit: number; readonly chance: number }
  /** It could be a lot, but the tanks went to groupings that leave fewer tonnes out or are more alike. */
  | { readonly code: 'noTankLeft' };

export function whyPlaced(zone: number, lot: LotChoice, facts: { readonly zones: readonly ChoiceZone[]; readonly lots: readonly LotChoice[]; readonly rules: ChoiceRules }): PlacedReason {
  const { zones, lots, rules } = facts;
  const own = zones[zone]!;
  const others = lots.filter((other) => other !== lot && mayJoin(own, zones[other.zones[0]!]!, rules));
  const distances = others.flatMap((other) => distance(own, other.zones.map((index) => zones[index]!)) ?? []);
  const elsewhere = distances.length === 0 ? null : Math.min(...distances);
  if (lot.zones.length === 1) return { code: 'alone', distance: null, elsewhere };
  return { code: 'alike', distance: distance(own, lot.zones.map((index) => zones[index]!)) ?? 0, elsewhere };
}

/** Root of the mean squared distance over the measures in common; null without any. */
function distance(zone: ChoiceZone, lot: readonly ChoiceZone[]): number | null {
  const shared = COMPARED.filter((code) => [zone, ...lot].every(({ values }) => values[code] !== null));
  return shared.length === 0 ? null : Math.sqrt(distanceFrom(zone, lot, shared));
}

export function whyLeftOut(zone: ChoiceZone, tanks: readonly ChoiceTank[], rules: ChoiceRules): LeftOutReason {
  const tonnes = sumTonnes([zone]);
  if (rules.dayTonnes !== null && tonnes.value > rules.dayTonnes) return { code: 'overDay', tonnes: tonnes.value, limit: rules.dayTonnes };
  if (tonnes.value > dayLimit([zone], rules)) return { code: 'overPress', tonnes: tonnes.value, limit: dayLimit([zone], rules) };
  const missed = missedTarget([zone], rules);
  if (missed !== null) return missed.value === null ? { code: 'notRead', measure: missed.measure } : { code: 'outsideTarget', measure: missed.measure, value: missed.value };
  const litres = litresFrom(tonnes, litresOf([zone], rules));
  const largest = tanks.reduce<ChoiceTank | null>((best, tank) => (best === null || tank.volumeL * tank.fillShare > best.volumeL * best.fillShare ? tank : best), null);
  if (largest === null) return { code: 'noTankLeft' };
  const { chanceOfFit, workingL } = fitTank(litres, largest);
  return chanceOfFit < rules.leastChance ? { code: 'tooBig', litres: litres.value, limit: workingL, chance: chanceOfFit } : { code: 'noTankLeft' };
}
