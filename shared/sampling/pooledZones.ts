import type { BasisMeasure, BasisSpread, BasisZone, PlanBasis } from '../contracts/planBasis.ts';
import type { PlanChoices, PlannedMeasureChoice } from '../contracts/planChoices.ts';
import { mergedFigures, mergedPilot } from './mergedZones.ts';

/** Zone numbers that a plan samples as one, in lists of two or more. */
export type Pools = readonly (readonly number[])[];

/** The number that speaks for a zone in a plan: the lowest of its pool, or its own. */
export function headOf(pools: Pools, zone: number): number {
  const pool = pools.find((numbers) => numbers.includes(zone));
  return pool ? Math.min(...pool) : zone;
}

/** Zone numbers that a pool's number stands for. */
export function membersOf(pools: Pools, head: number): readonly number[] {
  return pools.find((numbers) => numbers.includes(head)) ?? [head];
}

/** Two zones, or pools of zones, sampled as one from now on. */
export function joinPools(pools: Pools, one: number, other: number): number[][] {
  const joined = [...new Set([...membersOf(pools, one), ...membersOf(pools, other)])].sort((a, b) => a - b);
  return [...pools.filter((pool) => !pool.some((zone) => joined.includes(zone))).map((pool) => [...pool]), joined];
}

/** Every zone of a pool on its own again. */
export function partPool(pools: Pools, zone: number): number[][] {
  return pools.filter((pool) => !pool.includes(zone)).map((pool) => [...pool]);
}

/** Choices with other pools: a spread or a mean typed for a zone is not that of its pool, nor the other way round. */
function withPools(choices: PlanChoices, pools: number[][], touched: readonly number[]): PlanChoices {
  const forget = (typed: Record<string, number>) => {
    const kept = Object.entries(typed).filter(([zone]) => !touched.includes(Number(zone)));
    return kept.length > 0 ? Object.fromEntries(kept) : undefined;
  };
  const forgetIn = (choice: PlannedMeasureChoice): PlannedMeasureChoice => ({ ...choice, ...(choice.spreads ? { spreads: forget(choice.spreads) } : {}), ...(choice.means ? { means: forget(choice.means) } : {}) });
  return { ...choices, pools, measures: choices.measures.map(forgetIn) };
}

/** The choices with two zones, or pools of zones, sampled as one. */
export function choicesJoined(choices: PlanChoices, one: number, other: number): PlanChoices {
  return withPools(choices, joinPools(choices.pools, one, other), [...membersOf(choices.pools, one), ...membersOf(choices.pools, other)]);
}

/** The choices with the zones of a pool on their own again. */
export function choicesParted(choices: PlanChoices, zone: number): PlanChoices {
  return withPools(choices, partPool(choices.pools, zone), membersOf(choices.pools, zone));
}

/**
 * What a plan stands on when some zones are sampled as one: each pool is a zone with the lowest number of its members,
 * all their vines, and the spread inside them and between their means; so is what a pilot read in them, which keeps its
 * two-stage rule. The zones themselves stay as they are.
 * Numbers that are no zone of the basis are passed over.
 */
export function pooledBasis(basis: PlanBasis, pools: Pools): PlanBasis {
  const known = pools.map((pool) => basis.zones.filter(({ number }) => pool.includes(number)).map(({ number }) => number)).filter((pool) => pool.length > 1);
  if (known.length === 0) return basis;
  const groups = basis.zones.flatMap(({ number }, index) => (headOf(known, number) === number ? [membersOf(known, number).map((zone) => (zone === number ? index : basis.zones.findIndex((one) => one.number === zone)))] : []));
  return { ...basis, zones: groups.map((group) => pooledZone(basis.zones, group)), measures: basis.measures.map((measure) => pooledMeasure(measure, basis.zones, groups)) };
}

function pooledZone(zones: readonly BasisZone[], group: readonly number[]): BasisZone {
  const head = zones[group[0]!]!;
  if (group.length === 1) return head;
  const members = group.map((index) => zones[index]!);
  const sum = (of: (zone: BasisZone) => number) => members.reduce((total, zone) => total + of(zone), 0);
  return { ...head, name: members.map(({ name, number }) => name || String(number)).join(' + '), colour: null, vines: sum(({ vines }) => vines), eligible: sum(({ eligible }) => eligible), members: members.map(({ number }) => number) };
}

function pooledMeasure(measure: BasisMeasure, zones: readonly BasisZone[], groups: readonly (readonly number[])[]): BasisMeasure {
  return {
    ...measure,
    spreads: groups.map((group) => pooledSpread(group.map((index) => ({ vines: zones[index]!.vines, spread: measure.spreads[index]! })))),
    pilots: groups.map((group) => (group.length === 1 ? (measure.pilots[group[0]!] ?? null) : mergedPilot(group.map((index) => ({ vines: zones[index]!.vines, pilot: measure.pilots[index] ?? null })), measure.spreads[group[0]!]!.kind))),
  };
}

const sources = ['zone', 'block', 'estate', 'trade'] as const;

function pooledSpread(parts: readonly { readonly vines: number; readonly spread: BasisSpread }[]): BasisSpread {
  if (parts.length === 1) return parts[0]!.spread;
  const merged = (value: (spread: BasisSpread) => number) => mergedFigures(parts.map(({ vines, spread }) => ({ vines, spread: { kind: spread.kind, value: value(spread) }, mean: spread.expectedMean })));
  const of = parts.map(({ spread }) => spread);
  // No better known than the least known of them; what all took from the block or the estate is counted once.
  const source = sources[Math.max(...of.map((spread) => sources.indexOf(spread.source)))]!;
  const together = (values: readonly number[]) => (source === 'zone' ? values.reduce((sum, value) => sum + value, 0) : Math.max(...values));
  const { spread, mean } = merged(({ value }) => value);
  return {
    kind: spread.kind,
    value: spread.value,
    cautious: merged(({ cautious }) => cautious).spread.value,
    source,
    n: source === 'trade' ? 0 : together(of.map(({ n }) => n)),
    seasons: source === 'trade' ? [] : [...new Set(of.flatMap(({ seasons }) => seasons))].sort((a, b) => a - b),
    df: source === 'trade' || of.some(({ df }) => df === null) ? null : together(of.map(({ df }) => df!)),
    outliers: of.reduce((sum, { outliers }) => sum + outliers, 0),
    withOutliers: of.every(({ withOutliers }) => withOutliers === null) ? null : merged(({ withOutliers, value }) => withOutliers ?? value).spread.value,
    withoutOutliers: of.every(({ withoutOutliers }) => withoutOutliers === null) ? null : merged(({ withoutOutliers, value }) => withoutOutliers ?? value).spread.value,
    expectedMean: mean,
    isMeanAssumed: of.some(({ isMeanAssumed }) => isMeanAssumed),
  };
}
