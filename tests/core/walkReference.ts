import type { Random } from '../../shared/analysis/random.ts';
import type { Walk } from '../../shared/sampling/walk.ts';
import type { AisleCase } from './walkCases.ts';

/**
 * An independent look at the same walks: distances by Floyd-Warshall on a graph built straight from the case, orders by
 * Held & Karp 1962. It shares no code with the product.
 */

type Mode = 'closed' | 'open' | { aisle: number; t: number };

const name = (aisle: number, t: number): string => `${aisle}|${t}`;

export interface Closure {
  readonly distance: (from: string, to: string) => number;
  readonly gate: string;
}

export function closureOf(aisles: AisleCase, more: readonly { aisle: number; t: number }[] = []): Closure {
  const places = aisles.aisles.map(([bottom, top, targets], j) => {
    const beside = [...(aisles.rowsTargets?.[j - 1] ?? []), ...(aisles.rowsTargets?.[j] ?? [])];
    const gaps = (aisles.gaps ?? []).filter(([gapAisle]) => gapAisle === j || gapAisle + 1 === j).map(([, t]) => t);
    const breaks = (aisles.breaks ?? []).filter(([aisle]) => aisle === j).flatMap(([, low, high]) => [low, high]);
    const extra = more.filter(({ aisle }) => aisle === j).map(({ t }) => t);
    return [...new Set([bottom, top, ...(targets ?? []), ...beside, ...gaps, ...breaks, ...extra])].sort((a, b) => a - b);
  });
  const nodes = places.flatMap((ts, j) => ts.map((t) => name(j, t)));
  const index = new Map(nodes.map((node, i) => [node, i]));
  const d = nodes.map((_, i) => nodes.map((__, j) => (i === j ? 0 : Infinity)));
  const join = (a: string, b: string, length: number): void => {
    const [i, j] = [index.get(a)!, index.get(b)!];
    d[i]![j] = Math.min(d[i]![j]!, length);
    d[j]![i] = Math.min(d[j]![i]!, length);
  };
  places.forEach((ts, j) => ts.slice(1).forEach((t, i) => {
    const isBroken = (aisles.breaks ?? []).some(([aisle, low, high]) => aisle === j && low < t && high > ts[i]!);
    if (!isBroken) join(name(j, ts[i]!), name(j, t), t - ts[i]!);
  }));
  aisles.bottom.forEach((length, j) => join(name(j, aisles.aisles[j]![0]), name(j + 1, aisles.aisles[j + 1]![0]), length));
  aisles.top.forEach((length, j) => join(name(j, aisles.aisles[j]![1]), name(j + 1, aisles.aisles[j + 1]![1]), length));
  for (const [j, t, length] of aisles.gaps ?? []) join(name(j, t), name(j + 1, t), length);
  for (let k = 0; k < nodes.length; k++) {
    for (let i = 0; i < nodes.length; i++) for (let j = 0; j < nodes.length; j++) d[i]![j] = Math.min(d[i]![j]!, d[i]![k]! + d[k]![j]!);
  }
  const [aisle, end] = aisles.gate;
  return { distance: (from, to) => d[index.get(from)!]![index.get(to)!]!, gate: name(aisle, aisles.aisles[aisle]![end === 'b' ? 0 : 1]) };
}

/** Nodes from which each target can be served, targets in reading order. */
export function servingNodes(aisles: AisleCase): string[][] {
  if (aisles.rowsTargets !== undefined) return aisles.rowsTargets.flatMap((ts, k) => ts.map((t) => [name(k, t), name(k + 1, t)]));
  return aisles.aisles.flatMap(([, , ts], j) => (ts ?? []).map((t) => [name(j, t)]));
}

export function heldKarp(aisles: AisleCase, mode: Mode): number {
  const { distance, gate } = closureOf(aisles, typeof mode === 'object' ? [mode] : []);
  const targets = servingNodes(aisles);
  const full = 2 ** targets.length - 1;
  if (full === 0) return typeof mode === 'object' ? distance(gate, name(mode.aisle, mode.t)) : 0;
  const best = Array.from({ length: full + 1 }, () => targets.map((nodes) => nodes.map(() => Infinity)));
  targets.forEach((nodes, k) => nodes.forEach((node, side) => (best[1 << k]![k]![side] = distance(gate, node))));
  for (let set = 1; set <= full; set++) {
    targets.forEach((nodes, k) => nodes.forEach((node, side) => {
      const here = best[set]![k]![side]!;
      if (here === Infinity) return;
      targets.forEach((others, m) => {
        if (((set >> m) & 1) === 1) return;
        const next = best[set | (1 << m)]![m]!;
        others.forEach((other, otherSide) => (next[otherSide] = Math.min(next[otherSide]!, here + distance(node, other))));
      });
    }));
  }
  const homeward = (node: string): number => (mode === 'closed' ? distance(node, gate) : mode === 'open' ? 0 : distance(node, name(mode.aisle, mode.t)));
  return Math.min(...targets.flatMap((nodes, k) => nodes.map((node, side) => best[full]![k]![side]! + homeward(node))));
}

/** Shortest length of a walk that serves the targets in this order, each from whichever side suits. */
export function lengthInOrder(aisles: AisleCase, order: readonly number[], mode: 'closed' | 'open'): number {
  const { distance, gate } = closureOf(aisles);
  const targets = servingNodes(aisles);
  let reached = new Map<string, number>([[gate, 0]]);
  for (const target of order) {
    reached = new Map(targets[target]!.map((node) => [node, Math.min(...[...reached].map(([from, length]) => length + distance(from, node)))]));
  }
  return Math.min(...[...reached].map(([node, length]) => length + (mode === 'closed' ? distance(node, gate) : 0)));
}

/** Names the first thing wrong with a walk as a path through the case, or null: no step goes through a row. */
export function faultOf(aisles: AisleCase, walk: Walk, targetCount: number): string | null {
  let lengthM = 0;
  for (const [i, { from, to, lengthM: step }] of walk.steps.entries()) {
    const before = walk.steps[i - 1];
    if (before !== undefined && (before.to.alley !== from.alley || before.to.t !== from.t)) return `step ${i} does not begin where the last ended`;
    const [low, high] = [Math.min(from.t, to.t), Math.max(from.t, to.t)];
    if (from.alley === to.alley) {
      const [bottom, top] = aisles.aisles[from.alley]!;
      if (low < bottom || high > top || Math.abs(step - (high - low)) > 1e-9) return `step ${i} leaves aisle ${from.alley}`;
      if ((aisles.breaks ?? []).some(([aisle, shut, open]) => aisle === from.alley && low < open && high > shut)) return `step ${i} jumps a break`;
    } else {
      const j = Math.min(from.alley, to.alley);
      const [here, next] = from.alley === j ? [from, to] : [to, from];
      const allowed = [
        [aisles.aisles[j]![0], aisles.aisles[j + 1]?.[0], aisles.bottom[j]],
        [aisles.aisles[j]![1], aisles.aisles[j + 1]?.[1], aisles.top[j]],
        ...(aisles.gaps ?? []).filter(([aisle]) => aisle === j).map(([, t, length]) => [t, t, length]),
      ];
      const fits = Math.abs(from.alley - to.alley) === 1 && allowed.some(([a, b, length]) => here.t === a && next.t === b && step === length);
      if (!fits) return `step ${i} crosses a row between aisles ${from.alley} and ${to.alley}`;
    }
    lengthM += step;
  }
  if (Math.abs(lengthM - walk.lengthM) > 1e-9) return 'the length is not that of the steps';
  const nodes = servingNodes(aisles);
  const passed = new Set(walk.steps.flatMap(({ from, to }) => [name(from.alley, from.t), name(to.alley, to.t)]));
  if (walk.stops.length !== targetCount || new Set(walk.stops.map(({ target }) => target)).size !== targetCount) return 'not every target is served once';
  if (walk.steps.length > 0 && nodes.some((allowed) => !allowed.some((node) => passed.has(node)))) return 'a target is not on the path';
  return null;
}

export interface CaseKind {
  readonly uneven?: boolean;
  readonly gaps?: boolean;
  readonly eitherSide?: boolean;
  readonly interrupted?: boolean;
}

/** A random case of 2-6 aisles and 1-7 targets, lengths in whole metres. */
export function randomCase(random: Random, kind: CaseKind): AisleCase {
  const whole = (low: number, high: number): number => low + Math.floor(random() * (high - low + 1));
  const count = whole(2, 6);
  const ends = Array.from({ length: count }, () => (kind.uneven === true ? [whole(0, 6), whole(15, 40)] as const : [0, 30] as const));
  const steps = (): number[] => Array.from({ length: count - 1 }, () => (kind.uneven === true ? whole(1, 12) : 3));
  const [bottom, top] = [steps(), steps()];
  const rectangular = { bottom, top, gate: [whole(0, count - 1), random() < 0.5 ? 'b' : 't'] as const };
  const gaps: [number, number, number][] = [];
  const breaks: [number, number, number][] = [];
  if (kind.gaps === true) for (let g = whole(1, 3); g > 0; g--) gaps.push([whole(0, count - 2), whole(6, 15), whole(1, 5)]);
  if (kind.interrupted === true) {
    // a notch in one aisle, with ways round both of its ends to a neighbour
    const aisle = whole(0, count - 1);
    const [low, high] = [whole(7, 9), whole(11, 14)];
    const beside = aisle === 0 ? 0 : aisle === count - 1 ? count - 2 : aisle - whole(0, 1);
    breaks.push([aisle, low, high]);
    gaps.push([beside, low, whole(1, 5)], [beside, high, whole(1, 5)]);
  }
  const targetCount = whole(1, kind.eitherSide === true ? 6 : 7);
  const targets = Array.from({ length: targetCount }, () => ({ place: whole(0, kind.eitherSide === true ? count - 2 : count - 1), t: 0 }));
  const inBreak = (aisle: number, t: number): boolean => breaks.some(([broken, low, high]) => broken === aisle && t > low && t < high);
  for (const target of targets) {
    const beside = kind.eitherSide === true ? [target.place, target.place + 1] : [target.place];
    do target.t = whole(Math.max(...beside.map((j) => ends[j]![0])), Math.min(...beside.map((j) => ends[j]![1])));
    while (beside.some((aisle) => inBreak(aisle, target.t)));
  }
  const byPlace = (place: number): number[] => targets.filter((target) => target.place === place).map(({ t }) => t).sort((a, b) => a - b);
  const optional = { ...(gaps.length > 0 ? { gaps } : {}), ...(breaks.length > 0 ? { breaks } : {}) };
  if (kind.eitherSide === true) {
    return { aisles: ends, rowsTargets: Array.from({ length: count - 1 }, (_, k) => byPlace(k)), ...rectangular, ...optional };
  }
  return { aisles: ends.map(([low, high], j) => [low, high, byPlace(j)] as const), ...rectangular, ...optional };
}
