import { AnalysisError } from '../analysis/analysisError.ts';

/** A walk problem as a graph; see `cheapestEdgeUse`. */
export interface WalkProblem {
  readonly nodeCount: number;
  /** Ends and cost (>= 0) of each edge; a node's edges should lie close together in the list. */
  readonly edges: readonly { readonly a: number; readonly b: number; readonly cost: number }[];
  /** Of each target, one or two nodes of which one must be on the walk. */
  readonly targetNodes: readonly (readonly number[])[];
  readonly start: number;
  /** A node, the start again, or anywhere. */
  readonly end: number | 'start' | 'anywhere';
}

/** One edge of the programme. Places are positions in the state's bytes. */
export interface WalkProgrammeStep {
  readonly cost: number;
  readonly placeA: number;
  readonly placeB: number;
  /** Where the frontier begins in the state. */
  readonly frontierStart: number;
  /** Nodes whose last edge this is; places counted after the earlier one has left. */
  readonly leaving: readonly LeavingNode[];
}

export interface LeavingNode {
  readonly node: number;
  readonly place: number;
  readonly mustBeUsed: boolean;
  /** Bits of the targets whose first node this is, and whose second. */
  readonly firstOf: readonly number[];
  readonly secondOf: readonly number[];
}

export interface WalkPlan extends Pick<WalkProblem, 'start' | 'end'> {
  readonly steps: readonly WalkProgrammeStep[];
  /** Bytes of a state. */
  readonly width: number;
}

/** A component's number and a parity share one byte. */
const WIDEST = 100;

/**
 * Everything about the programme that does not depend on the choices: the frontier after each edge, where its nodes lie
 * in a state, and the bit of each target that waits for its second node. Null when a needed node has no edge.
 */
export function planWalkSteps(problem: WalkProblem): WalkPlan | null {
  const { edges, start, end } = problem;
  const needs = nodeNeeds(problem);
  if (needs === null) return null;
  const { lastEdge, mustUse, eitherAt } = needs;
  const bits = new BitPool();
  const frontier: number[] = [];
  let widest = 0;
  const drafts = edges.map(({ a, b, cost }, e) => {
    for (const node of [a, b]) if (!frontier.includes(node)) frontier.push(node);
    widest = Math.max(widest, frontier.length);
    const [slotA, slotB] = [frontier.indexOf(a), frontier.indexOf(b)];
    const leaving = [a, b].filter((node) => lastEdge[node] === e).map((node) => {
      const slot = frontier.indexOf(node);
      frontier.splice(slot, 1);
      return { node, slot, mustBeUsed: mustUse.has(node), ...bits.meet(eitherAt.get(node) ?? []) };
    });
    return { cost, slotA, slotB, leaving };
  });
  if (widest > WIDEST) throw new AnalysisError('walk-too-many-gaps', `More than ${WIDEST} ways through the rows lie side by side; list fewer gaps.`);
  const frontierStart = 1 + Math.ceil(bits.most / 8);
  const steps = drafts.map(({ cost, slotA, slotB, leaving }): WalkProgrammeStep => ({
    cost, frontierStart, placeA: frontierStart + slotA, placeB: frontierStart + slotB,
    leaving: leaving.map(({ slot, ...rest }) => ({ ...rest, place: frontierStart + slot })),
  }));
  return { steps, start, end, width: frontierStart + widest };
}

interface NodeNeeds {
  readonly lastEdge: Int32Array;
  readonly mustUse: ReadonlySet<number>;
  readonly eitherAt: ReadonlyMap<number, readonly number[]>;
}

function nodeNeeds({ nodeCount, edges, targetNodes, start, end }: WalkProblem): NodeNeeds | null {
  const lastEdge = new Int32Array(nodeCount).fill(-1);
  edges.forEach(({ a, b }, e) => {
    lastEdge[a] = e;
    lastEdge[b] = e;
  });
  const mustUse = new Set(typeof end === 'number' ? [start, end] : [start]);
  const eitherAt = new Map<number, number[]>();
  for (const [target, nodes] of targetNodes.entries()) {
    const reachable = [...new Set(nodes)].filter((node) => lastEdge[node]! >= 0);
    if (reachable.length === 0) return null;
    if (reachable.length === 1) mustUse.add(reachable[0]!);
    else for (const node of reachable) eitherAt.set(node, [...(eitherAt.get(node) ?? []), target]);
  }
  for (const node of mustUse) if (lastEdge[node]! < 0) return null;
  return { lastEdge, mustUse, eitherAt };
}

/** Lends each target a bit from its first node to its second, and uses bits again. */
class BitPool {
  most = 0;
  private readonly lent = new Map<number, number>();
  private readonly returned = new Set<number>();
  private readonly free: number[] = [];

  meet(targets: readonly number[]): { firstOf: number[]; secondOf: number[] } {
    const secondOf = targets.filter((target) => this.lent.has(target)).map((target) => this.giveBack(target));
    const firstOf = targets.filter((target) => !this.returned.has(target)).map((target) => this.lend(target));
    return { firstOf, secondOf };
  }

  private giveBack(target: number): number {
    const bit = this.lent.get(target)!;
    this.lent.delete(target);
    this.returned.add(target);
    this.free.push(bit);
    return bit;
  }

  private lend(target: number): number {
    const bit = this.free.pop() ?? this.most++;
    this.lent.set(target, bit);
    return bit;
  }
}
