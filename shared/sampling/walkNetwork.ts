import { AnalysisError } from '../analysis/analysisError.ts';
import {
  type Alley, type AlleyLayout, checkOnLayout, type WalkEdge, type WalkNetwork, type WalkNode, type WalkPlace, type WalkTarget,
} from './walkLayout.ts';

/**
 * The graph of a layout. Columns are the alleys and, where a place lies on a headland between two alleys, an extra
 * column with that place, passed through by every crossing of its neighbours at no cost.
 * Edges are listed column by column: along the column from bottom to top, then its crossings to the next column.
 */
export function walkNetwork(layout: AlleyLayout, targets: readonly WalkTarget[], places: readonly WalkPlace[]): WalkNetwork {
  checkOnLayout(layout, targets, places);
  const graph = new GraphMaking();
  const alleys = layout.alleys.map((alley, j) => alleyNodes(graph, j, { alley, ts: tsOfAlley(layout, j, targets, places) }));
  const placeNodes = new Array<number>(places.length).fill(-1);
  places.forEach((place, i) => {
    if (place.at !== 'headland') placeNodes[i] = alleys[place.alley]!.get(tOfPlace(layout, place))!;
  });
  layout.alleys.forEach((alley, j) => {
    places.forEach((place, i) => {
      if (place.at !== 'headland' && place.alley === j) placeNodes[i] = graph.spur(placeNodes[i]!, place);
    });
    alongAlley(graph, alley, alleys[j]!);
    if (j + 1 === layout.alleys.length) return;
    let ways = crossingsFrom(layout, j, alleys);
    for (const { place, index } of headlandPlaces(places, j)) {
      const passed = ways.map((way) => passColumn(graph, way, place));
      ways = passed;
      const own = passed.find(({ end }) => end === place.end);
      if (own === undefined) throw new AnalysisError('walk-off-layout', `The start or end of the walk lies on a headland that is shut beside alley ${j + 1}; move it or open the headland.`);
      placeNodes[index] = graph.spur(own.from, place);
    }
    for (const { from, to, lengthM, done } of ways) graph.edge(from, to, lengthM * (1 - done), 'crossing');
  });
  return {
    nodes: graph.nodes, edges: graph.edges, placeNodes,
    targetNodes: targets.map(({ alleys: allowed, t }) => allowed.map((alley) => alleys[alley]!.get(clampToAlley(layout.alleys[alley]!, t))!)),
  };
}

class GraphMaking {
  readonly nodes: WalkNode[] = [];
  readonly edges: WalkEdge[] = [];

  node(node: WalkNode): number {
    return this.nodes.push(node) - 1;
  }

  edge(a: number, b: number, lengthM: number, kind: WalkEdge['kind']): void {
    this.edges.push({ a, b, lengthM, kind });
  }

  /** A node at the end of a path of its own; the foot itself when the path has no length. */
  spur(foot: number, { spur }: WalkPlace): number {
    if (spur === undefined) return foot;
    const far = this.node({ alley: this.nodes[foot]!.alley, s: spur.s, t: spur.t });
    this.edge(far, foot, spur.lengthM, 'spur');
    return far;
  }
}

/** Nodes of an alley by t, ascending. */
type NodesByT = Map<number, number>;

function alleyNodes(graph: GraphMaking, j: number, { alley, ts }: { alley: Alley; ts: readonly number[] }): NodesByT {
  const sorted = [...new Set(ts)].sort((a, b) => a - b);
  return new Map(sorted.map((t) => [t, graph.node({ alley: j, s: alley.s, t })]));
}

function tsOfAlley(layout: AlleyLayout, j: number, targets: readonly WalkTarget[], places: readonly WalkPlace[]): number[] {
  const alley = layout.alleys[j]!;
  return [
    alley.bottomT, alley.topT,
    ...(alley.breaks ?? []).flat(),
    ...targets.filter(({ alleys }) => alleys.includes(j)).map(({ t }) => t),
    ...layout.gaps.filter((gap) => gap.alley === j || gap.alley + 1 === j).map(({ t }) => t),
    ...places.filter((place) => place.at === 'alley' && place.alley === j).map((place) => tOfPlace(layout, place)),
  ].map((t) => clampToAlley(alley, t));
}

function clampToAlley(alley: Alley, t: number): number {
  return Math.min(alley.topT, Math.max(alley.bottomT, t));
}

function tOfPlace(layout: AlleyLayout, place: WalkPlace): number {
  const alley = layout.alleys[place.alley]!;
  if (place.at === 'alley') return clampToAlley(alley, place.t);
  return place.end === 'bottom' ? alley.bottomT : alley.topT;
}

function alongAlley(graph: GraphMaking, alley: Alley, nodes: NodesByT): void {
  const inOrder = [...nodes];
  inOrder.slice(1).forEach(([t, node], i) => {
    const [fromT, from] = inOrder[i]!;
    const isBroken = (alley.breaks ?? []).some(([low, high]) => fromT < high && t > low);
    if (!isBroken) graph.edge(from, node, t - fromT, 'alley');
  });
}

interface Way {
  readonly from: number;
  readonly to: number;
  readonly lengthM: number;
  readonly end: 'bottom' | 'top' | null;
  /** Share of the way that lies behind `from`. */
  readonly done: number;
}

/** Leads a way through the extra column of a place: to the place where it lies on this way, else at no cost. */
function passColumn(graph: GraphMaking, way: Way, place: WalkPlace & { readonly at: 'headland' }): Way {
  const [here, next] = [graph.nodes[way.from]!, graph.nodes[way.to]!];
  const onThisWay = way.end === place.end;
  const done = onThisWay ? place.share : way.done;
  const along = (from: number, to: number): number => (onThisWay ? from + ((to - from) * (done - way.done)) / (1 - way.done || 1) : from);
  const inserted = graph.node({ alley: here.alley, s: along(here.s, next.s), t: along(here.t, next.t) });
  graph.edge(way.from, inserted, way.lengthM * (done - way.done), 'crossing');
  return { ...way, from: inserted, done };
}

function crossingsFrom(layout: AlleyLayout, j: number, alleys: readonly NodesByT[]): Way[] {
  const [here, next] = [layout.alleys[j]!, layout.alleys[j + 1]!];
  const [nodes, nextNodes] = [alleys[j]!, alleys[j + 1]!];
  const ways: Way[] = [];
  const bottomM = layout.bottomM[j] ?? null;
  const topM = layout.topM[j] ?? null;
  if (bottomM !== null) ways.push({ from: nodes.get(here.bottomT)!, to: nextNodes.get(next.bottomT)!, lengthM: bottomM, end: 'bottom', done: 0 });
  for (const gap of layout.gaps.filter(({ alley }) => alley === j).sort((a, b) => a.t - b.t)) {
    ways.push({ from: nodes.get(clampToAlley(here, gap.t))!, to: nextNodes.get(clampToAlley(next, gap.t))!, lengthM: gap.lengthM, end: null, done: 0 });
  }
  if (topM !== null) ways.push({ from: nodes.get(here.topT)!, to: nextNodes.get(next.topT)!, lengthM: topM, end: 'top', done: 0 });
  return ways;
}

function headlandPlaces(places: readonly WalkPlace[], j: number) {
  return places
    .flatMap((place, index) => (place.at === 'headland' && place.alley === j ? [{ place, index }] : []))
    .sort((a, b) => a.place.share - b.place.share);
}
