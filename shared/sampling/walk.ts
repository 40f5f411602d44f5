import { AnalysisError } from '../analysis/analysisError.ts';
import { eulerWalk, type Passage } from './walkEuler.ts';
import type { AlleyLayout, WalkEdge, WalkNetwork, WalkNode, WalkPlace, WalkTarget } from './walkLayout.ts';
import { walkNetwork } from './walkNetwork.ts';
import { cheapestEdgeUse } from './walkProgramme.ts';

/** What to walk: from the start past every target, and back, or on to another place, or ending at the last target. */
export interface WalkRequest {
  readonly layout: AlleyLayout;
  /** In the order of row and vine: ties between two directions go to the lower. */
  readonly targets: readonly WalkTarget[];
  readonly start: WalkPlace;
  readonly end: WalkPlace | 'start' | 'anywhere';
  /** What the walk shall be shortest in, for example seconds on a slope; metres when left out. */
  readonly costOf?: (edge: WalkEdge, from: WalkNode, to: WalkNode) => number;
}

export interface WalkStep {
  readonly from: WalkNode;
  readonly to: WalkNode;
  readonly lengthM: number;
  readonly kind: WalkEdge['kind'];
}

export interface WalkStop {
  /** Index into the targets of the request. */
  readonly target: number;
  /** The alley from which it is served. */
  readonly alley: number;
  /** Number of steps walked before the stop. */
  readonly afterStep: number;
  readonly distanceM: number;
}

export interface Walk {
  readonly lengthM: number;
  /** In the unit of `costOf`; equal to `lengthM` without it. */
  readonly cost: number;
  readonly steps: readonly WalkStep[];
  /** Every target once, in walking order: at its first pass. */
  readonly stops: readonly WalkStop[];
}

/**
 * The exact shortest walk of one person (see `cheapestEdgeUse`). A closed walk is as long the other way round; the
 * direction is taken in which bags are carried less far, ties to the lower first target.
 * Throws `AnalysisError` when a target cannot be reached.
 */
export function shortestWalk(request: WalkRequest): Walk {
  const { layout, targets, start, end } = request;
  const network = walkNetwork(layout, targets, typeof end === 'object' ? [start, end] : [start]);
  const costs = network.edges.map((edge) => request.costOf?.(edge, network.nodes[edge.a]!, network.nodes[edge.b]!) ?? edge.lengthM);
  const use = cheapestEdgeUse({
    nodeCount: network.nodes.length,
    edges: network.edges.map(({ a, b }, e) => ({ a, b, cost: costs[e]! })),
    targetNodes: network.targetNodes,
    start: network.placeNodes[0]!,
    end: typeof end === 'object' ? network.placeNodes[1]! : end,
  });
  if (use === null) throw new AnalysisError('walk-unreachable', 'Some targets cannot be reached from the start without crossing a row; open a headland or list a gap.');
  const there = eulerWalk(network.edges, use.copies, network.placeNodes[0]!);
  const walk = walkAlong(network, there, use.cost);
  if (end !== 'start') return walk;
  const back = walkAlong(network, there.map(({ edge, from, to }) => ({ edge, from: to, to: from })).reverse(), use.cost);
  return carriesLess(back, walk) ? back : walk;
}

function walkAlong(network: WalkNetwork, passages: readonly Passage[], cost: number): Walk {
  const steps = passages.map(({ edge, from, to }): WalkStep => ({
    from: network.nodes[from]!, to: network.nodes[to]!, lengthM: network.edges[edge]!.lengthM, kind: network.edges[edge]!.kind,
  }));
  const waiting = new Map<number, number[]>();
  network.targetNodes.forEach((nodes, target) => {
    for (const node of nodes) waiting.set(node, [...(waiting.get(node) ?? []), target]);
  });
  const served = new Set<number>();
  const stops: WalkStop[] = [];
  let distanceM = 0;
  const serveAt = (node: number, afterStep: number): void => {
    for (const target of waiting.get(node) ?? []) {
      if (served.has(target)) continue;
      served.add(target);
      stops.push({ target, alley: network.nodes[node]!.alley, afterStep, distanceM });
    }
  };
  serveAt(passages[0]?.from ?? network.placeNodes[0]!, 0);
  passages.forEach(({ to }, i) => {
    distanceM += steps[i]!.lengthM;
    serveAt(to, i + 1);
  });
  return { lengthM: distanceM, cost, steps, stops };
}

function carriesLess(a: Walk, b: Walk): boolean {
  const carried = (walk: Walk): number => walk.stops.reduce((sum, stop) => sum + walk.lengthM - stop.distanceM, 0);
  const difference = carried(a) - carried(b);
  if (Math.abs(difference) > 1e-6) return difference < 0;
  return (a.stops[0]?.target ?? 0) < (b.stops[0]?.target ?? 0);
}
