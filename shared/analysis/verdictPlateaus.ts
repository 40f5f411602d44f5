/**
 * A straight border looks like a stripe: along it a layer is alike over any distance. What tells them apart is width. A camera's
 * or a machine's swaths are narrow and each has a level of its own; plateaus are wide, and a few of them explain the whole
 * profile across. The best stair with treads of at least 40 m is found by dynamic programming (Fisher 1958, from memory). A border
 * winds a little and smoothing blurs it, so that its riser slants: half a tread may pass in a straight line from one level to the next,
 * as in lines of several segments (Hudson 1966, from memory). Where a second layer measured by another sensor steps at the same
 * places, width need not tell: treads may be as narrow as a patch.
 * In: profiles across the direction of the suspected stripes. Out: whether they are borders. Cost: steps² × treads; where risers slant, steps³ × treads of at most 120 steps.
 */

import { correlation } from './agreement.ts';

/** Profile across a direction: mean and number of cells of each step, in order; steps without cells are left out. */
export interface AcrossProfile {
  readonly means: Float64Array;
  readonly counts: Float64Array;
  /** Place of each step across, in steps from the outermost. */
  readonly places: Float64Array;
}

/** Wider than the swath of a camera flown over vines, and than what a machine passes over at once; our own limit. */
const NARROWEST_TREAD_M = 40;
const NARROWEST_TREAD_TOGETHER_M = 15;
/** A border that winds more is no stripe to begin with (judgement). */
const WIDEST_RISER_M = 20;
const MOST_TREADS = 6;
/** Share of the profile's variance that the stair must explain, alone or when another layer steps along. */
const LEAST_EXPLAINED = 0.95;
/** What is left to slanting risers is small; with less, their search is not worth its time. */
const LEAST_EXPLAINED_STEEP = 0.85;
export const LEAST_EXPLAINED_TOGETHER = 0.85;
const LEAST_CORRELATION = 0.8;
/** Slanting risers are sought on so many steps at most: 120 take a tenth of a second, 350 four seconds. */
const MOST_STEPS = 120;

/** `others`: the same profile of each other layer. */
export function arePlateaus(profile: AcrossProfile, others: readonly AcrossProfile[], stepM: number): boolean {
  const wide = stairShare(profile, NARROWEST_TREAD_M / stepM);
  if (wide >= LEAST_EXPLAINED) return true;
  if (wide >= LEAST_EXPLAINED_STEEP && slantedStairShare(profile, { narrowest: NARROWEST_TREAD_M / stepM, widestRiser: WIDEST_RISER_M / stepM }) >= LEAST_EXPLAINED) return true;
  return stepTogether(profile, others) && stairShare(profile, NARROWEST_TREAD_TOGETHER_M / stepM) >= LEAST_EXPLAINED_TOGETHER;
}

/** Whether one of the others rises and falls with the profile. */
export function stepTogether(profile: AcrossProfile, others: readonly AcrossProfile[]): boolean {
  return others.some((other) => Math.abs(correlation(profile.means, other.means)) >= LEAST_CORRELATION);
}

/**
 * Share of the profile's variance that the best stair of two to six treads explains, each at least `narrowest` steps wide;
 * 0 when two do not fit. Means 1 1 1 5 5 5 with equal counts and treads of 3 give 1.
 */
export function stairShare({ means, counts, places }: AcrossProfile, narrowest: number): number {
  const steps = means.length;
  const [weights, sums, squares] = [new Float64Array(steps + 1), new Float64Array(steps + 1), new Float64Array(steps + 1)];
  for (let i = 0; i < steps; i++) {
    weights[i + 1] = weights[i]! + counts[i]!;
    sums[i + 1] = sums[i]! + counts[i]! * means[i]!;
    squares[i + 1] = squares[i]! + counts[i]! * means[i]! * means[i]!;
  }
  const within = (from: number, to: number) => squares[to]! - squares[from]! - (sums[to]! - sums[from]!) ** 2 / (weights[to]! - weights[from]!);
  const total = steps > 0 ? within(0, steps) : 0;
  if (total <= 0) return 0;
  const isWide = (from: number, to: number) => places[to - 1]! - places[from]! + 1 >= narrowest;
  let before = Float64Array.from({ length: steps + 1 }, (_, to) => (to > 0 && isWide(0, to) ? within(0, to) : Infinity));
  let least = total;
  for (let treads = 2; treads <= MOST_TREADS; treads++) {
    const now = new Float64Array(steps + 1).fill(Infinity);
    for (let to = 1; to <= steps; to++) {
      for (let from = 1; from < to; from++) {
        if (before[from]! < now[to]! && isWide(from, to)) now[to] = Math.min(now[to]!, before[from]! + within(from, to));
      }
    }
    least = Math.min(least, now[steps]!);
    before = now;
  }
  return Math.min(1, Math.max(0, 1 - least / total));
}

/**
 * The same, where up to `widestRiser` steps between two treads may lie on the straight line from one level to the next; treads that
 * touch have none. Of a long profile neighbouring steps are taken together, and what differs within them counts as not explained.
 * Means 1 1 2 3 4 5 5 with equal counts, treads of 2 and risers of 3 give 1.
 */
export function slantedStairShare(profile: AcrossProfile, { narrowest, widestRiser }: { narrowest: number; widestRiser: number }): number {
  const together = Math.ceil(profile.means.length / MOST_STEPS);
  if (together <= 1) return slantedShare(profile, { narrowest, widestRiser });
  const coarse = coarser(profile, together);
  const [of, all] = [coarse, profile].map((one) => treadFrom(one, 0, one.means.length).within);
  return all! <= 0 ? 0 : (of! / all!) * slantedShare(coarse, { narrowest: narrowest / together, widestRiser: widestRiser / together });
}

/** So many places taken together. */
function coarser({ means, counts, places }: AcrossProfile, together: number): AcrossProfile {
  const at = [...places].map((place) => Math.floor(place / together));
  const kept = [...new Set(at)];
  const parts = kept.map((place) => treadFrom({ means, counts }, at.indexOf(place), at.lastIndexOf(place) + 1));
  return { means: Float64Array.from(parts, ({ level }) => level), counts: Float64Array.from(parts, ({ from, to }) => counts.slice(from, to).reduce((sum, count) => sum + count, 0)), places: Float64Array.from(kept) };
}

function slantedShare({ means, counts, places }: AcrossProfile, { narrowest, widestRiser }: { narrowest: number; widestRiser: number }): number {
  const steps = means.length;
  const all = treadFrom({ means, counts }, 0, steps);
  if (steps === 0 || all.within <= 0) return 0;
  const treads: Tread[] = [];
  for (let from = 0; from < steps; from++) {
    for (let to = from + 1; to <= steps; to++) if (places[to - 1]! - places[from]! + 1 >= narrowest) treads.push(treadFrom({ means, counts }, from, to));
  }
  const beginning = Array.from({ length: steps }, (_, from) => treads.flatMap((tread, at) => (tread.from === from ? [at] : [])));
  let before = treads.map(({ from, within }) => (from === 0 ? within : Infinity));
  let least = all.within;
  for (let count = 2; count <= MOST_TREADS; count++) {
    const now = treads.map(() => Infinity);
    treads.forEach((tread, at) => {
      if (before[at] === Infinity) return;
      for (let from = tread.to; from < steps && places[from]! - places[tread.to - 1]! - 1 <= widestRiser; from++) {
        for (const next of beginning[from]!) {
          const cost = before[at]! + treads[next]!.within + besideRiser({ means, counts, places }, tread, treads[next]!);
          if (cost < now[next]!) now[next] = cost;
        }
      }
    });
    treads.forEach(({ to }, at) => (least = to === steps ? Math.min(least, now[at]!) : least));
    before = now;
  }
  return Math.min(1, Math.max(0, 1 - least / all.within));
}

/** Steps `from` up to and without `to` at one level, and what is left within them. */
interface Tread {
  readonly from: number;
  readonly to: number;
  readonly level: number;
  readonly within: number;
}

function treadFrom({ means, counts }: Pick<AcrossProfile, 'means' | 'counts'>, from: number, to: number): Tread {
  let [weight, sum] = [0, 0];
  for (let i = from; i < to; i++) [weight, sum] = [weight + counts[i]!, sum + counts[i]! * means[i]!];
  const level = sum / weight;
  let within = 0;
  for (let i = from; i < to; i++) within += counts[i]! * (means[i]! - level) ** 2;
  return { from, to, level, within };
}

/** What the steps between two treads are off the straight line from one level to the other. */
function besideRiser({ means, counts, places }: AcrossProfile, before: Tread, after: Tread): number {
  const [start, end] = [places[before.to - 1]!, places[after.from]!];
  let sum = 0;
  for (let i = before.to; i < after.from; i++) sum += counts[i]! * (means[i]! - before.level - ((after.level - before.level) * (places[i]! - start)) / (end - start)) ** 2;
  return sum;
}
