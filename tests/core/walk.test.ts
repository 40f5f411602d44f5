import { describe, expect, it } from 'vitest';
import { AnalysisError } from '../../shared/analysis/analysisError.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import { shortestWalk } from '../../shared/sampling/walk.ts';
import type { WalkPlace } from '../../shared/sampling/walkLayout.ts';
import { type AisleCase, gateOf, layoutOf, targetsOf, walkCases } from './walkCases.ts';
import { type CaseKind, faultOf, heldKarp, lengthInOrder, randomCase } from './walkReference.ts';
import { sevenStates } from './walkReferenceTable.ts';

const walkOf = (aisles: AisleCase, end: 'start' | 'anywhere' | WalkPlace = 'start') =>
  shortestWalk({ layout: layoutOf(aisles), targets: targetsOf(aisles), start: gateOf(aisles), end });

describe('the stated cases', () => {
  it.each(Object.entries(walkCases))('%s: closed and open walk have the shortest length', (_, aisles) => {
    const closed = walkOf(aisles);
    const open = walkOf(aisles, 'anywhere');
    expect(closed.lengthM).toBeCloseTo(aisles.closed, 9);
    expect(open.lengthM).toBeCloseTo(aisles.open, 9);
    for (const walk of [closed, open]) expect(faultOf(aisles, walk, targetsOf(aisles).length)).toBeNull();
    expect(lengthInOrder(aisles, closed.stops.map(({ target }) => target), 'closed')).toBeCloseTo(aisles.closed, 9);
    expect(lengthInOrder(aisles, open.stops.map(({ target }) => target), 'open')).toBeCloseTo(aisles.open, 9);
    expect(lengthInOrder(aisles, aisles.closedOrder, 'closed')).toBeCloseTo(aisles.closed, 9);
    expect(lengthInOrder(aisles, aisles.openOrder, 'open')).toBeCloseTo(aisles.open, 9);
  });

  it('the seven-state table agrees on the closed ones without gaps or a choice of side', () => {
    for (const id of ['W1', 'W2', 'W3', 'W4'] as const) expect(sevenStates(walkCases[id]!)).toBe(walkCases[id]!.closed);
  });
});

describe('against Held and Karp on random small blocks', () => {
  const kinds: [string, CaseKind][] = [
    ['rectangular', {}],
    ['uneven', { uneven: true }],
    ['with gaps', { uneven: true, gaps: true }],
    ['either side', { uneven: true, eitherSide: true }],
    ['either side with gaps', { uneven: true, eitherSide: true, gaps: true }],
    ['interrupted alleys', { uneven: true, interrupted: true }],
    ['interrupted, either side', { uneven: true, interrupted: true, eitherSide: true }],
  ];

  it.each(kinds)('%s: closed, open and fixed-end walks are shortest and never go through a row (120 blocks)', (_, kind) => {
    const random = seededRandom(2024);
    for (let round = 0; round < 120; round++) {
      const aisles = randomCase(random, kind);
      const targetCount = targetsOf(aisles).length;
      const endAisle = Math.floor(random() * aisles.aisles.length);
      const fixed = { at: 'end', alley: endAisle, end: random() < 0.5 ? 'bottom' : 'top' } as const;
      const fixedT = aisles.aisles[endAisle]![fixed.end === 'bottom' ? 0 : 1];
      const walks = [walkOf(aisles), walkOf(aisles, 'anywhere'), walkOf(aisles, fixed)];
      const expected = [heldKarp(aisles, 'closed'), heldKarp(aisles, 'open'), heldKarp(aisles, { aisle: endAisle, t: fixedT })];
      expect(walks.map(({ lengthM }) => lengthM), JSON.stringify(aisles)).toEqual(expected);
      for (const walk of walks) expect(faultOf(aisles, walk, targetCount), JSON.stringify(aisles)).toBeNull();
    }
  });

  it('the seven-state table gives the same closed lengths on 300 rectangular and uneven blocks', () => {
    const random = seededRandom(77);
    for (let round = 0; round < 300; round++) {
      const aisles = randomCase(random, { uneven: round % 2 === 1 });
      expect(walkOf(aisles).lengthM).toBe(sevenStates(aisles));
    }
  });
});

describe('gates, spurs and ends', () => {
  const aisles = walkCases['W2']!;
  const layout = layoutOf(aisles);
  const targets = targetsOf(aisles);

  it('a gate between two rows is a step nearer to one and further from the other', () => {
    // a quarter of the way from aisle 2 to 3 at the bottom: checked by an aisle inserted there in the reference graph
    const start: WalkPlace = { at: 'headland', alley: 2, end: 'bottom', share: 0.25 };
    const inserted: AisleCase = {
      aisles: [...aisles.aisles.slice(0, 3), [0, 1000, []], ...aisles.aisles.slice(3)],
      bottom: [3, 3, 0.75, 2.25, 3], top: [3, 3, 0, 3, 3], gate: [3, 'b'],
    };
    for (const [end, mode] of [['start', 'closed'], ['anywhere', 'open']] as const) {
      expect(shortestWalk({ layout, targets, start, end }).lengthM).toBeCloseTo(heldKarp({ ...inserted, aisles: inserted.aisles.map((aisle, j) => (j === 3 ? [0, 1000] as const : aisle)) }, mode), 9);
    }
  });

  it('two places on one headland step lie their shares apart', () => {
    const place = (share: number): WalkPlace => ({ at: 'headland', alley: 2, end: 'bottom', share });
    expect(shortestWalk({ layout, targets: [], start: place(0.9), end: place(0.2) }).lengthM).toBeCloseTo(2.1, 9);
    const across: WalkPlace = { at: 'headland', alley: 2, end: 'top', share: 0.5 };
    expect(shortestWalk({ layout, targets: [], start: place(0.5), end: across }).lengthM).toBeCloseTo(1.5 + 30 + 1.5, 9);
  });

  it('a gate off the headland adds its spur on the way out and back', () => {
    const spur = { lengthM: 40, s: 2, t: -40 };
    expect(shortestWalk({ layout, targets, start: { at: 'end', alley: 2, end: 'bottom', spur }, end: 'start' }).lengthM).toBeCloseTo(114 + 80, 9);
    expect(shortestWalk({ layout, targets, start: { at: 'end', alley: 2, end: 'bottom', spur }, end: 'anywhere' }).lengthM).toBeCloseTo(101 + 40, 9);
  });

  it('a walk without targets, or with its only target at the gate, is 0 long', () => {
    expect(shortestWalk({ layout, targets: [], start: gateOf(aisles), end: 'start' })).toMatchObject({ lengthM: 0, steps: [], stops: [] });
    const atGate = shortestWalk({ layout, targets: [{ alleys: [2], t: 0 }], start: gateOf(aisles), end: 'anywhere' });
    expect(atGate).toMatchObject({ lengthM: 0, stops: [{ target: 0, alley: 2, afterStep: 0, distanceM: 0 }] });
  });

  it('one alley alone is walked there and back', () => {
    const single = { layout: { alleys: [{ s: 0, bottomT: 0, topT: 30 }], bottomM: [], topM: [], gaps: [] }, start: { at: 'end', alley: 0, end: 'bottom' } as const };
    expect(shortestWalk({ ...single, targets: [{ alleys: [0], t: 12 }], end: 'start' }).lengthM).toBe(24);
    expect(shortestWalk({ ...single, targets: [{ alleys: [0], t: 12 }], end: 'anywhere' }).lengthM).toBe(12);
  });

  it('a target behind shut ways is refused in a sentence, and so is one outside its alley', () => {
    const shut = { ...layout, bottomM: [3, 3, 3, null], topM: [3, 3, 3, null] };
    expect(() => shortestWalk({ layout: shut, targets, start: gateOf(aisles), end: 'start' })).toThrow(AnalysisError);
    expect(() => shortestWalk({ layout: shut, targets, start: gateOf(aisles), end: 'start' })).toThrow(/open a headland or list a gap/);
    expect(() => shortestWalk({ layout, targets: [{ alleys: [1], t: 99 }], start: gateOf(aisles), end: 'start' })).toThrow(/Target 1 lies outside alley 2 of 5/);
    expect(() => shortestWalk({ layout: shut, targets: [], start: { at: 'headland', alley: 3, end: 'top', share: 0.5 }, end: 'start' })).toThrow(/headland that is shut/);
  });
});

describe('handing a walk over', () => {
  // lengths from the Python prototype
  const rest = (id: 'W2' | 'W3', done: readonly number[], standingAt: number | null) => {
    const aisles = walkCases[id]!;
    const targets = targetsOf(aisles);
    const remaining = targets.filter((_, i) => !done.includes(i));
    const at = standingAt === null ? null : targets[standingAt]!;
    const start: WalkPlace = at === null ? gateOf(aisles) : { at: 'alley', alley: at.alleys[0]!, t: at.t };
    return shortestWalk({ layout: layoutOf(aisles), targets: remaining, start, end: at === null ? 'start' : gateOf(aisles) }).lengthM;
  };

  it.each([
    ['W2', [0, 2], 2, 86, 96],
    ['W2', [0, 2, 3, 4], 4, 68, 86],
    ['W3', [0, 2], 2, 110, 119],
    ['W3', [0, 2, 1, 3], 3, 76, 106],
  ] as const)('%s after %j: from the spot to the gate, and for somebody fresh from the gate', (id, done, at, fromSpot, fromGate) => {
    expect(rest(id, done, at)).toBeCloseTo(fromSpot, 9);
    expect(rest(id, done, null)).toBeCloseTo(fromGate, 9);
  });

  it('the rest of a shortest walk is itself shortest', () => {
    const random = seededRandom(9);
    for (let round = 0; round < 60; round++) {
      const aisles = randomCase(random, { uneven: true });
      const targets = targetsOf(aisles);
      const walk = walkOf(aisles);
      const half = walk.stops.slice(0, Math.ceil(walk.stops.length / 2));
      const last = half.at(-1)!;
      const remaining = targets.filter((_, i) => !half.some(({ target }) => target === i));
      const start: WalkPlace = { at: 'alley', alley: last.alley, t: targets[last.target]!.t };
      const left = shortestWalk({ layout: layoutOf(aisles), targets: remaining, start, end: gateOf(aisles) });
      expect(left.lengthM).toBeCloseTo(walk.lengthM - last.distanceM, 9);
    }
  });
});

describe('the direction of a closed walk', () => {
  it('is the one in which bags are carried less far', () => {
    const random = seededRandom(12);
    for (let round = 0; round < 60; round++) {
      const walk = walkOf(randomCase(random, { uneven: true }));
      const carried = walk.stops.reduce((sum, { distanceM }) => sum + walk.lengthM - distanceM, 0);
      // walked the other way round, a bag is picked at its last pass of this direction
      let distance = 0;
      const lastPass = new Map<string, number>();
      walk.steps.forEach(({ to, lengthM }) => lastPass.set(`${to.alley}|${to.t}`, (distance += lengthM)));
      const otherWay = walk.stops.reduce((sum, { afterStep, distanceM }) => {
        const node = afterStep === 0 ? walk.steps[0]?.from : walk.steps[afterStep - 1]!.to;
        return sum + (node === undefined ? 0 : Math.max(distanceM, lastPass.get(`${node.alley}|${node.t}`) ?? 0));
      }, 0);
      expect(carried).toBeLessThanOrEqual(otherWay + 1e-6);
    }
  });

  it('W2 is walked from the last row to the first: 442 bag metres instead of 470', () => {
    // distances to 0 2 3 4 1 5 7 6 by hand: 9 28 30 46 59 74 93 103 of 114; walked backwards, these are what is left
    const walk = walkOf(walkCases['W2']!);
    expect(walk.stops.map(({ target }) => target)).toEqual([6, 7, 5, 1, 4, 3, 2, 0]);
    expect(walk.stops.reduce((sum, { distanceM }) => sum + 114 - distanceM, 0)).toBe(442);
  });
});
