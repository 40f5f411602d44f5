import { AnalysisError } from '../analysis/analysisError.ts';

/** A gate of a block; null stands for where the day begins and ends. */
export interface BlockGate {
  readonly block: number;
  readonly gate: number;
}

export interface ChainInput {
  /** How many gates each block has. */
  readonly gateCounts: readonly number[];
  /** Cost of a block's own walk from one of its gates to another (or back to the same). */
  readonly walkCost: (block: number, gateIn: number, gateOut: number) => number;
  readonly travelCost: (from: BlockGate | null, to: BlockGate | null) => number;
  /** Walk the blocks in the order given; else the cheapest order is found. */
  readonly keepOrder?: boolean;
}

export interface Chain {
  readonly visits: readonly { readonly block: number; readonly gateIn: number; readonly gateOut: number }[];
  readonly cost: number;
}

/** Orders beyond this many blocks are not searched: 2^n sets. */
const MOST_BLOCKS = 12;

/**
 * Several blocks in one round, exactly: which block after which, in by which gate and out by which (dynamic programme
 * over sets, Held & Karp 1962). Ties go to the earlier block and gate.
 */
export function chainBlocks(input: ChainInput): Chain {
  const { gateCounts, keepOrder = false } = input;
  const count = gateCounts.length;
  if (count === 0) return { visits: [], cost: 0 };
  if (!keepOrder && count > MOST_BLOCKS) {
    throw new AnalysisError('too-many-blocks', `The best order of ${count} blocks cannot be searched; give the order, or plan at most ${MOST_BLOCKS} at once.`);
  }
  const costs: ChainInput = { ...input, walkCost: remembered(input.walkCost) };
  let layer = new Map([[0, new Map<string, Leg>([['start', { block: -1, gateIn: -1, gateOut: -1, cost: 0, before: null }]])]]);
  for (let visited = 0; visited < count; visited++) {
    const next = new Map<number, Map<string, Leg>>();
    for (const [done, legs] of layer) {
      for (const leg of legs.values()) {
        for (let block = 0; block < count; block++) {
          const isTaken = Math.floor(done / 2 ** block) % 2 === 1;
          if (isTaken || (keepOrder && block !== visited)) continue;
          visitBlock(costs, { leg, block, legs: legsOf(next, done + 2 ** block) });
        }
      }
    }
    layer = next;
  }
  let best: Leg | null = null;
  let bestCost = Infinity;
  for (const leg of [...layer.values()].flatMap((legs) => [...legs.values()])) {
    const cost = leg.cost + input.travelCost({ block: leg.block, gate: leg.gateOut }, null);
    if (cost < bestCost) [best, bestCost] = [leg, cost];
  }
  return { visits: visitsOf(best), cost: bestCost };
}

interface Leg {
  readonly block: number;
  readonly gateIn: number;
  readonly gateOut: number;
  readonly cost: number;
  readonly before: Leg | null;
}

function remembered(walkCost: ChainInput['walkCost']): ChainInput['walkCost'] {
  const known = new Map<string, number>();
  return (block, gateIn, gateOut) => {
    const key = `${block}|${gateIn}|${gateOut}`;
    const cost = known.get(key) ?? walkCost(block, gateIn, gateOut);
    known.set(key, cost);
    return cost;
  };
}

function legsOf(reached: Map<number, Map<string, Leg>>, set: number): Map<string, Leg> {
  const known = reached.get(set) ?? new Map<string, Leg>();
  reached.set(set, known);
  return known;
}

function visitBlock({ gateCounts, walkCost, travelCost }: ChainInput, { leg, block, legs }: { leg: Leg; block: number; legs: Map<string, Leg> }): void {
  const from = leg.block < 0 ? null : { block: leg.block, gate: leg.gateOut };
  for (let gateIn = 0; gateIn < gateCounts[block]!; gateIn++) {
    const there = leg.cost + travelCost(from, { block, gate: gateIn });
    for (let gateOut = 0; gateOut < gateCounts[block]!; gateOut++) {
      const cost = there + walkCost(block, gateIn, gateOut);
      const key = `${block}|${gateOut}`;
      if (cost < (legs.get(key)?.cost ?? Infinity)) legs.set(key, { block, gateIn, gateOut, cost, before: leg });
    }
  }
}

function visitsOf(last: Leg | null): Chain['visits'] {
  const visits: { block: number; gateIn: number; gateOut: number }[] = [];
  for (let leg = last; leg !== null && leg.block >= 0; leg = leg.before) visits.unshift({ block: leg.block, gateIn: leg.gateIn, gateOut: leg.gateOut });
  return visits;
}
