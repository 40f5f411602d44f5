import type { AlleyLayout, WalkPlace, WalkTarget } from '../../shared/sampling/walkLayout.ts';

/** An aisle is bottom, top and the targets in it; `rowsTargets[k]` are those of the row between aisles k and k + 1. */
export interface AisleCase {
  readonly aisles: readonly (readonly [bottom: number, top: number, targets?: readonly number[]])[];
  readonly rowsTargets?: readonly (readonly number[])[];
  readonly bottom: readonly number[];
  readonly top: readonly number[];
  readonly gaps?: readonly (readonly [aisle: number, t: number, length: number])[];
  readonly breaks?: readonly (readonly [aisle: number, fromT: number, toT: number])[];
  readonly gate: readonly [aisle: number, end: 'b' | 't'];
}

export function layoutOf(aisles: AisleCase): AlleyLayout {
  return {
    alleys: aisles.aisles.map(([bottomT, topT], s) => ({
      s, bottomT, topT, breaks: (aisles.breaks ?? []).filter(([aisle]) => aisle === s).map(([, fromT, toT]) => [fromT, toT] as const),
    })),
    bottomM: aisles.bottom,
    topM: aisles.top,
    gaps: (aisles.gaps ?? []).map(([alley, t, lengthM]) => ({ alley, t, lengthM })),
  };
}

/** Targets in reading order. */
export function targetsOf(aisles: AisleCase): WalkTarget[] {
  if (aisles.rowsTargets !== undefined) return aisles.rowsTargets.flatMap((ts, k) => ts.map((t) => ({ alleys: [k, k + 1], t })));
  return aisles.aisles.flatMap(([, , ts], j) => (ts ?? []).map((t) => ({ alleys: [j], t })));
}

export function gateOf({ gate: [alley, end] }: AisleCase): WalkPlace {
  return { at: 'end', alley, end: end === 'b' ? 'bottom' : 'top' };
}

/** Lengths: the general programme and Held-Karp, both in Python, agreed. */
export const walkCases: Record<string, AisleCase & { closed: number; open: number; closedOrder: number[]; openOrder: number[] }> = {
  W1: { aisles: [[0, 10, [4, 7]], [0, 10, [2]], [0, 10, [9]]], bottom: [2, 2], top: [2, 2], gate: [0, 'b'], closed: 30, closedOrder: [0, 1, 3, 2], open: 23, openOrder: [2, 0, 1, 3] },
  W2: {
    aisles: [[0, 30, [3, 25]], [0, 30, []], [0, 30, [10, 12, 28]], [0, 30, [29]], [0, 30, [5, 15]]], bottom: [3, 3, 3, 3], top: [3, 3, 3, 3], gate: [2, 'b'],
    closed: 114, closedOrder: [0, 2, 3, 4, 1, 5, 7, 6], open: 101, openOrder: [0, 2, 3, 6, 7, 5, 4, 1],
  },
  W3: {
    aisles: [[0, 22, [20]], [2, 27, [5, 24]], [1, 31, []], [4, 36, [8, 30]], [5, 40, [12, 22, 39]]], bottom: [4, 3, 5, 3], top: [6, 5, 6, 5], gate: [0, 't'],
    closed: 123, closedOrder: [0, 2, 1, 3, 5, 6, 7, 4], open: 100, openOrder: [0, 2, 1, 3, 5, 6, 7, 4],
  },
  W4: { aisles: [[6, 38, [31]], [5, 13, []], [3, 34, [11, 12]], [1, 18, [8]]], bottom: [11, 5, 2], top: [3, 12, 11], gate: [3, 'b'], closed: 82, closedOrder: [0, 1, 2, 3], open: 57, openOrder: [3, 1, 2, 0] },
  W5: {
    aisles: [[0, 60, [28, 33]], [0, 60, [31]], [0, 60, [29, 50]], [0, 60, [30]]], bottom: [2.5, 2.5, 2.5], top: [2.5, 2.5, 2.5],
    gaps: [[0, 30, 2.5], [1, 30, 2.5], [2, 32, 2.5]], gate: [1, 'b'], closed: 125, closedOrder: [0, 1, 2, 3, 4, 5], open: 76.5, openOrder: [0, 1, 2, 3, 5, 4],
  },
  W6: {
    aisles: [[0, 50], [0, 50], [2, 52], [4, 54]], rowsTargets: [[10, 44], [12, 40], [9, 47]], bottom: [2.5, 3.2, 3.2], top: [2.5, 3.2, 3.2], gate: [0, 'b'],
    closed: 111.4, closedOrder: [0, 2, 3, 1, 5, 4], open: 81.1, openOrder: [4, 0, 2, 3, 1, 5],
  },
};
