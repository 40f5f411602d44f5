/**
 * Do readings of fruit confirm zones that were made from layers? The readings took no part in making the zones, so this is
 * an independent check. Per measure: one-way analysis of variance (F with its degrees of freedom, omega squared: Hays 1963,
 * from memory), and the leave-one-out R² with its p-value from permuting zones among the readings of the same row, because
 * neighbouring vines are alike and a free shuffle would be too easy to beat. In: values with zone and row. Cost: permutations
 * × readings.
 */

import { sampleVariance, sum } from 'simple-statistics';
import { fTails } from '../sampling/distributions.ts';
import { shuffled, type Random } from './random.ts';

export interface ZoneReading {
  readonly value: number;
  readonly zone: number;
  /** Name of the vine row, or null when it is not known. */
  readonly row: string | null;
}

export interface Anova {
  readonly n: number;
  readonly zones: number;
  readonly f: number;
  readonly dfBetween: number;
  readonly dfWithin: number;
  readonly p: number;
  readonly rSquared: number;
  /** Share of the variance of the population between zones, free of R²'s optimism; may be negative. */
  readonly omegaSquared: number;
}

/** One-way analysis of variance; null with fewer than two zones, or not more readings than zones. */
export function anovaByZone(readings: readonly ZoneReading[]): Anova | null {
  const groups = valuesByZone(readings);
  const n = readings.length;
  const dfBetween = groups.length - 1;
  const dfWithin = n - groups.length;
  if (dfBetween < 1 || dfWithin < 1) return null;
  const within = sum(groups.map((values) => (values.length > 1 ? sampleVariance(values) * (values.length - 1) : 0)));
  const total = sampleVariance(readings.map(({ value }) => value)) * (n - 1);
  const between = total - within;
  const meanWithin = within / dfWithin;
  const f = between / dfBetween / meanWithin;
  return {
    n,
    zones: groups.length,
    f,
    dfBetween,
    dfWithin,
    p: fTails(f, dfBetween, dfWithin).upper,
    rSquared: between / total,
    omegaSquared: (between - dfBetween * meanWithin) / (total + meanWithin),
  };
}

function valuesByZone(readings: readonly ZoneReading[]): number[][] {
  const groups = new Map<number, number[]>();
  for (const { zone, value } of readings) groups.set(zone, [...(groups.get(zone) ?? []), value]);
  return [...groups.values()];
}

/**
 * 1 − Σ(y − zone mean without y)² / Σ(y − mean without y)²: how much better a zone's other readings foretell a reading than
 * all other readings do. 1 2 3 7 8 9 in zones 1 1 1 2 2 2 give 0.892; zones without meaning give negative values. A reading
 * alone in its zone is foretold by all others.
 */
export function leaveOneOutRSquared(values: readonly number[], zones: readonly number[]): number {
  const sums = new Map<number, { sum: number; count: number }>();
  let total = 0;
  values.forEach((value, i) => {
    const zone = sums.get(zones[i]!) ?? { sum: 0, count: 0 };
    sums.set(zones[i]!, { sum: zone.sum + value, count: zone.count + 1 });
    total += value;
  });
  let missedByZone = 0;
  let missedByAll = 0;
  values.forEach((value, i) => {
    const zone = sums.get(zones[i]!)!;
    const fromAll = (total - value) / (values.length - 1);
    const fromZone = zone.count > 1 ? (zone.sum - value) / (zone.count - 1) : fromAll;
    missedByZone += (value - fromZone) ** 2;
    missedByAll += (value - fromAll) ** 2;
  });
  return missedByAll > 0 ? 1 - missedByZone / missedByAll : 0;
}

export interface ReadingsTest {
  readonly n: number;
  readonly leaveOneOutRSquared: number;
  /** Share of shuffles, the real one included, that do at least as well (Phipson & Smyth 2010, from memory). */
  readonly p: number;
  /** Rows: shuffled within rows. Free: rows are unknown or lie in one zone each; the p-value is then too small. */
  readonly shuffle: 'rows' | 'free';
  readonly anova: Anova | null;
}

const SHUFFLES = 199;
/** Share of the readings that must lie in rows crossing several zones for shuffling within rows to say anything. */
const LEAST_CROSSING = 0.5;

export function testOnReadings(readings: readonly ZoneReading[], random: Random): ReadingsTest {
  const values = readings.map(({ value }) => value);
  const zones = readings.map(({ zone }) => zone);
  const observed = leaveOneOutRSquared(values, zones);
  const rows = indexesByRow(readings);
  const crossing = sum([0, ...rows.filter((indexes) => new Set(indexes.map((i) => zones[i])).size > 1).map((indexes) => indexes.length)]);
  const shuffle = crossing >= LEAST_CROSSING * readings.length ? 'rows' : 'free';
  const groups = shuffle === 'rows' ? rows : [Array.from(values.keys())];
  let asGood = 1;
  for (let i = 0; i < SHUFFLES; i++) if (leaveOneOutRSquared(values, shuffledWithin(zones, groups, random)) >= observed) asGood++;
  return { n: readings.length, leaveOneOutRSquared: observed, p: asGood / (SHUFFLES + 1), shuffle, anova: anovaByZone(readings) };
}

function indexesByRow(readings: readonly ZoneReading[]): number[][] {
  const rows = new Map<string, number[]>();
  readings.forEach(({ row }, i) => {
    if (row !== null) rows.set(row, [...(rows.get(row) ?? []), i]);
  });
  return [...rows.values()];
}

function shuffledWithin(zones: readonly number[], groups: readonly (readonly number[])[], random: Random): number[] {
  const out = [...zones];
  for (const group of groups) {
    const order = shuffled(group, random);
    group.forEach((at, i) => (out[at] = zones[order[i]!]!));
  }
  return out;
}
