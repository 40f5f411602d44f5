import { planWalkSteps, type WalkPlan, type WalkProblem, type WalkProgrammeStep } from './walkSteps.ts';
import { WalkStates } from './walkStates.ts';

/**
 * The shortest walk through a block, exactly.
 * A shortest walk is a lightest connected set of edges, each used 0, 1 or 2 times, that holds the start and a serving
 * node of each target, with every degree even (closed), or odd only at the start and one end (open, fixed end).
 * In: a graph whose edges are listed column by column. Out: how often each edge is walked. Own extension of Ratliff &
 * Rosenthal 1983 (Operations Research 31:507) to gaps, interrupted alleys and targets served from either side.
 * Cost: edges × states × 3, with some 10-500 states on a block.
 */
export interface EdgeUse {
  readonly cost: number;
  /** 0, 1 or 2 for each edge. */
  readonly copies: Uint8Array;
}

/** Null when a target cannot be reached. A walk that need not leave the start costs 0. */
export function cheapestEdgeUse(problem: WalkProblem): EdgeUse | null {
  const { start, end, edges, targetNodes } = problem;
  const staysPut = (end === 'start' || end === 'anywhere' || end === start) && targetNodes.every((nodes) => nodes.includes(start));
  if (staysPut) return { cost: 0, copies: new Uint8Array(edges.length) };
  const plan = planWalkSteps(problem);
  if (plan === null) return null;
  let states = WalkStates.beginning(plan.width);
  const history: WalkStates[] = [];
  for (const step of plan.steps) {
    states = advance(states, step, plan);
    history.push(states);
  }
  let best = -1;
  for (let i = 0; i < states.count; i++) {
    const isClosed = (states.bytes[i * plan.width]! & CLOSED) !== 0;
    if (isClosed && (best < 0 || states.cost[i]! < states.cost[best]!)) best = i;
  }
  return best < 0 ? null : { cost: states.cost[best]!, copies: traceBack(history, best) };
}

/*
 * A state as bytes: flags, then served targets as bits, then of each frontier node 2 × component + parity.
 * A byte 0 is an unused node; components are numbered in order of appearance.
 */
const END_USED = 1;
const CLOSED = 2;

function advance(states: WalkStates, step: WalkProgrammeStep, plan: WalkPlan): WalkStates {
  const next = new WalkStates(plan.width, states.count * 2);
  const row = new Uint8Array(plan.width);
  for (let i = 0; i < states.count; i++) {
    const from = i * plan.width;
    const mostCopies = (states.bytes[from]! & CLOSED) !== 0 ? 0 : 2;
    for (let copies = 0; copies <= mostCopies; copies++) {
      for (let at = 0; at < plan.width; at++) row[at] = states.bytes[from + at]!;
      if (copies > 0) useEdge(row, step, copies);
      if (!leaveNodes(row, step, plan)) continue;
      next.offer(row, { cost: states.cost[i]! + copies * step.cost, cameFrom: i, copies });
    }
  }
  return next;
}

function useEdge(row: Uint8Array, { placeA, placeB, frontierStart }: WalkProgrammeStep, copies: number): void {
  const componentA = row[placeA]! >> 1;
  const componentB = row[placeB]! >> 1;
  // two unused ends begin a component, under a number that no other has
  const joined = componentA !== 0 ? componentA : componentB !== 0 ? componentB : row.length - frontierStart + 1;
  if (componentA !== 0 && componentB !== 0 && componentA !== componentB) {
    for (let at = frontierStart; at < row.length; at++) if (row[at]! >> 1 === componentB) row[at] = 2 * joined + (row[at]! & 1);
  }
  const odd = copies & 1;
  row[placeA] = 2 * joined + ((row[placeA]! & 1) ^ odd);
  row[placeB] = 2 * joined + ((row[placeB]! & 1) ^ odd);
}

/** Takes the nodes whose last edge this was out of the frontier; false when one of them may not be left like that. */
function leaveNodes(row: Uint8Array, { leaving, frontierStart }: WalkProgrammeStep, plan: WalkPlan): boolean {
  for (const { node, place, mustBeUsed, firstOf, secondOf } of leaving) {
    const mark = row[place]!;
    if (mustBeUsed && mark === 0) return false;
    for (const bit of secondOf) {
      const at = 1 + (bit >> 3);
      const mask = 1 << (bit & 7);
      if (mark === 0 && (row[at]! & mask) === 0) return false;
      row[at]! &= ~mask;
    }
    if (mark !== 0) for (const bit of firstOf) row[1 + (bit >> 3)]! |= 1 << (bit & 7);
    if (!mayLeaveWith(mark & 1, node, { row, plan })) return false;
    row.copyWithin(place, place + 1);
    row[row.length - 1] = 0;
    if (mark !== 0 && !closesOrStays(row, mark >> 1, frontierStart)) return false;
  }
  renumber(row, frontierStart);
  return true;
}

function mayLeaveWith(parity: number, node: number, { row, plan: { start, end } }: { row: Uint8Array; plan: WalkPlan }): boolean {
  if (typeof end === 'number' && end !== start) return (parity === 1) === (node === start || node === end);
  if (parity === 0 || (end === 'anywhere' && node === start)) return true;
  if (end !== 'anywhere' || (row[0]! & END_USED) !== 0) return false;
  row[0]! |= END_USED;
  return true;
}

/** A component without a frontier node is the whole walk: nothing else may be begun, and nothing after it. */
function closesOrStays(row: Uint8Array, component: number, frontierStart: number): boolean {
  let others = false;
  for (let at = frontierStart; at < row.length; at++) {
    if (row[at]! >> 1 === component) return true;
    if (row[at] !== 0) others = true;
  }
  if (others || (row[0]! & CLOSED) !== 0) return false;
  row[0]! |= CLOSED;
  return true;
}

/** Components by order of appearance: a number above those given so far is new here and changes places with the next one. */
function renumber(row: Uint8Array, frontierStart: number): void {
  let given = 0;
  for (let at = frontierStart; at < row.length; at++) {
    const component = row[at]! >> 1;
    if (component <= given) continue;
    given += 1;
    if (component === given) continue;
    for (let other = at; other < row.length; other++) {
      const theirs = row[other]! >> 1;
      if (theirs === component) row[other] = 2 * given + (row[other]! & 1);
      else if (theirs === given) row[other] = 2 * component + (row[other]! & 1);
    }
  }
}

function traceBack(history: readonly WalkStates[], last: number): Uint8Array {
  const copies = new Uint8Array(history.length);
  let at = last;
  for (let e = history.length - 1; e >= 0; e--) {
    copies[e] = history[e]!.copies[at]!;
    at = history[e]!.cameFrom[at]!;
  }
  return copies;
}
