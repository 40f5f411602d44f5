import { crossTable } from '../analysis/agreement.ts';
import type { PlanChoices, PlannedMeasureChoice } from '../contracts/planChoices.ts';
import { headOf } from './pooledZones.ts';

export interface ChoicesOnZones {
  readonly choices: PlanChoices;
  /** Earlier zones, by number, of which something was said that fits no zone now. */
  readonly leftOut: readonly number[];
}

/**
 * The choices of a plan for other zones of the same vines. What was said of a zone goes to the zone that holds more than half of its
 * vines, if no other earlier zone has more vines there; zones that were sampled as one are one in this, and stay so if they still are
 * several. What finds no such zone is left out, so that the plan's general choice holds there. `before`, `after`: zone of each bearing
 * vine, 0 for none.
 */
export function choicesOnZones(choices: PlanChoices, before: ArrayLike<number>, after: ArrayLike<number>): ChoicesOnZones {
  const heirOf = heirs(before, after);
  const heads = Uint8Array.from({ length: before.length }, (_, vine) => headOf(choices.pools, before[vine]!));
  const largestIn = largest(before, after);
  const largestHeadIn = largest(heads, after);
  const leftOut = new Set<number>();
  const leave = <Found>(zones: readonly number[]): Found | null => {
    zones.forEach((zone) => leftOut.add(zone));
    return null;
  };

  /** Zones that the members of a pool, or a zone of its own, are now; null when one of them is none of these any more. */
  const nowOf = (members: readonly number[]): number[] | null => {
    const now = members.map((zone) => heirOf.get(zone) ?? 0);
    const isWhole = now.every((zone) => zone > 0 && largestHeadIn.get(zone) === Math.min(...members));
    return isWhole ? [...new Set(now)].sort((a, b) => a - b) : null;
  };
  const membersOf = (head: number) => choices.pools.find((pool) => Math.min(...pool) === head) ?? [head];
  const pools = choices.pools.flatMap((pool) => {
    const now = nowOf(pool) ?? leave<number[]>(pool);
    return now !== null && now.length > 1 ? [now] : [];
  });
  const byHead = (said: Record<string, number>) => renamed(said, (head) => nowOf(membersOf(head))?.[0] ?? leave(membersOf(head)));
  const byZone = (said: Record<string, number>) => renamed(said, (zone) => {
    const now = heirOf.get(zone);
    return now !== undefined && largestIn.get(now) === zone ? now : leave([zone]);
  });
  const measureNow = ({ spreads, means, ...rest }: PlannedMeasureChoice): PlannedMeasureChoice => ({ ...rest, ...typed('spreads', spreads && byHead(spreads)), ...typed('means', means && byHead(means)) });
  const carried = { ...choices, pools, zoneSeconds: byZone(choices.zoneSeconds), measures: choices.measures.map(measureNow) };
  return { choices: carried, leftOut: [...leftOut].sort((a, b) => a - b) };
}

/** Nothing typed at all is left unsaid. */
function typed<Key extends string>(key: Key, said: Record<string, number> | undefined): { [K in Key]?: Record<string, number> } {
  return (said && Object.keys(said).length > 0 ? { [key]: said } : {}) as { [K in Key]?: Record<string, number> };
}

function renamed(said: Record<string, number>, nameOf: (zone: number) => number | null): Record<string, number> {
  return Object.fromEntries(Object.entries(said).flatMap(([zone, value]) => {
    const now = nameOf(Number(zone));
    return now === null ? [] : [[String(now), value]];
  }));
}

/** Of each earlier zone the one that holds more than half of its vines. */
function heirs(before: ArrayLike<number>, after: ArrayLike<number>): Map<number, number> {
  const { counts, rows, columns } = crossTable(before, after);
  const found = new Map<number, number>();
  for (let from = 1; from < rows; from++) {
    const row = counts.subarray(from * columns, (from + 1) * columns);
    const vines = row.reduce((sum, count) => sum + count, 0);
    const to = row.findIndex((count, zone) => zone > 0 && count > vines / 2);
    if (to > 0) found.set(from, to);
  }
  return found;
}

/** Of each zone now the earlier one with the most vines in it; of two with the same, the lower number. */
function largest(before: ArrayLike<number>, after: ArrayLike<number>): Map<number, number> {
  const { counts, rows, columns } = crossTable(before, after);
  const found = new Map<number, number>();
  for (let to = 1; to < columns; to++) {
    const inZone = (from: number) => counts[from * columns + to]!;
    const earlier = Array.from({ length: rows - 1 }, (_, i) => i + 1).filter((from) => inZone(from) > 0);
    if (earlier.length > 0) found.set(to, earlier.reduce((best, from) => (inZone(from) > inZone(best) ? from : best)));
  }
  return found;
}
